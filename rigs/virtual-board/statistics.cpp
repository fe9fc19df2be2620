#include "rigs/virtual-board/statistics.hpp"

#include <cerrno>
#include <cstdio>
#include <cstring>
#include <nlohmann/json.hpp>

namespace halflsb::board {

namespace {

constexpr std::size_t most_stretches = 1000;

}  // namespace

void Statistics::reset(const std::string& filter) {
    filter_ = filter;
    begins_ = true;
}

void Statistics::block(std::uint64_t samples, Nanoseconds now, const LineIdle& idle) {
    if (begins_) {
        if (stretches_.size() == most_stretches) stretches_.erase(stretches_.begin());
        stretches_.push_back({filter_, 0, 0, now, now, idle, idle});
        begins_ = false;
    }
    Stretch& stretch = stretches_.back();
    ++stretch.blocks;
    stretch.samples += samples;
    stretch.last_ns = now;
    stretch.idle_last = idle;
    ++blocks_;
    samples_ += samples;
}

std::string statistics_json(const Account& account, const Statistics& statistics) {
    nlohmann::ordered_json json;
    json["device"] = account.device;
    json["baud"] = account.baud;
    json["faults"] = account.faults;
    json["bytes_in"] = account.bytes_in;
    json["bytes_out"] = account.bytes_out;
    json["blocks"] = statistics.blocks();
    json["samples"] = statistics.samples();
    json["stretches"] = nlohmann::ordered_json::array();
    for (const Stretch& stretch : statistics.stretches()) {
        nlohmann::ordered_json row;
        row["filter"] = stretch.filter;
        row["blocks"] = stretch.blocks;
        row["samples"] = stretch.samples;
        row["seconds"] = stretch.seconds();
        row["input_idle_share"] = nullptr;  // an unpaced line is never busy
        row["output_idle_share"] = nullptr;
        if (account.baud != 0 && stretch.blocks > 1) {
            row["input_idle_share"] = stretch.input_idle_share();
            row["output_idle_share"] = stretch.output_idle_share();
        }
        json["stretches"].push_back(row);
    }
    return json.dump(2) + "\n";
}

std::string write_statistics(const std::string& path, const std::string& json) {
    const std::string fresh = path + ".new";
    std::FILE* file = std::fopen(fresh.c_str(), "w");
    bool good = file != nullptr && std::fwrite(json.data(), 1, json.size(), file) == json.size();
    if (file != nullptr && std::fclose(file) != 0) good = false;
    if (good && std::rename(fresh.c_str(), path.c_str()) == 0) return "";
    return path + ": " + std::strerror(errno);
}

}  // namespace halflsb::board

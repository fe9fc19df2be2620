#include "rigs/virtual-board/filter_set.hpp"

#include <algorithm>
#include <cstring>

namespace halflsb::board {

namespace {

constexpr std::string_view checkweigher = "load-cell,smoothing,quick-smoothing,mains-notch,settle,settle-q31";

bool is_narrow(halflsb_format format) { return format == HALFLSB_Q15 || format == HALFLSB_I16; }

std::int32_t code_at(const void* words, std::size_t i, bool narrow) {
    std::int32_t wide = 0;
    std::int16_t word = 0;
    if (!narrow) {
        std::memcpy(&wide, static_cast<const char*>(words) + 4 * i, 4);
        return wide;
    }
    std::memcpy(&word, static_cast<const char*>(words) + 2 * i, 2);
    return word;
}

void put_code(void* words, std::size_t i, bool narrow, std::int32_t code) {
    const auto word = static_cast<std::int16_t>(code);
    if (narrow) {
        std::memcpy(static_cast<char*>(words) + 2 * i, &word, 2);
    } else {
        std::memcpy(static_cast<char*>(words) + 4 * i, &code, 4);
    }
}

/// The filter of rigs/filters, a sample at a time.
class CleanSteps : public CodeFilter {
public:
    explicit CleanSteps(const FilterParts& parts) : parts_(parts) {}
    void reset() override { parts_.reset(); }
    void reset_half() override { parts_.reset_half(); }
    std::int32_t step(std::int32_t x) override {
        alignas(4) char word[4];
        const bool narrow = is_narrow(parts_.format);
        put_code(word, 0, narrow, x);
        parts_.process(word, word, 1);
        return code_at(word, 0, narrow);
    }

private:
    FilterParts parts_;
};

}  // namespace

OfferedFilter::OfferedFilter(FilterParts parts, const Faults& faults) : parts_(std::move(parts)) {
    const bool deviates = faults.deviation.any() && parts_.variant != nullptr;
    if (!deviates && faults.passage.empty()) return;
    if (deviates) {
        faulty_ = parts_.variant(faults.deviation);
    } else {
        faulty_ = std::make_unique<CleanSteps>(parts_);
    }
    for (PassageFault fault : faults.passage) faulty_ = with_fault(fault, parts_.format, std::move(faulty_));
}

void OfferedFilter::reset() {
    if (faulty_ == nullptr) {
        parts_.reset();
    } else {
        faulty_->reset();
    }
}

void OfferedFilter::process(const void* in, void* out, std::uint16_t count) {
    if (faulty_ == nullptr) {
        parts_.process(in, out, count);
        return;
    }
    const bool narrow = is_narrow(parts_.format);
    faulty_->begin_block();
    for (std::size_t i = 0; i < count; ++i) put_code(out, i, narrow, faulty_->step(code_at(in, i, narrow)));
}

bool OfferedFilter::load(std::uint8_t table, std::uint16_t offset, const std::int32_t* values, std::uint8_t count) {
    return parts_.load != nullptr && parts_.load(table, offset, values, count);
}

std::vector<FilterParts> choose_filters(std::string_view choice, std::vector<FilterParts> all, std::string& problem) {
    if (choice == "all") return all;
    if (choice == "cw-7") choice = checkweigher;
    std::vector<FilterParts> chosen;
    while (true) {
        const std::size_t comma = choice.find(',');
        const std::string_view name = choice.substr(0, comma);
        const auto found = std::find_if(all.begin(), all.end(), [&](const auto& f) { return f.name == name; });
        if (found == all.end()) {
            std::vector<std::string_view> known = {"all", "cw-7"};
            for (const FilterParts& filter : all) known.push_back(filter.name);
            problem = "no filter is called \"" + std::string(name) + "\"; the nearest is \"" +
                      std::string(nearest(name, known)) + "\"";
            return {};
        }
        chosen.push_back(*found);
        if (comma == std::string_view::npos) return chosen;
        choice.remove_prefix(comma + 1);
    }
}

}  // namespace halflsb::board

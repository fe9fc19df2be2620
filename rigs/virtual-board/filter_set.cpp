#include "rigs/virtual-board/filter_set.hpp"

#include <algorithm>
#include <iterator>
#include <utility>

namespace halflsb::board {

namespace {

constexpr std::string_view checkweigher = "load-cell,smoothing,quick-smoothing,mains-notch,settle,settle-q31";

/// The filter of rigs/filters, a sample at a time.
class CleanSteps : public CodeFilter {
public:
    explicit CleanSteps(const FilterParts& parts) : parts_(parts) {}
    void reset() override { parts_.reset(); }
    void reset_half() override { parts_.reset_half(); }
    std::int32_t step(std::int32_t x) override {
        alignas(4) std::uint8_t word[4];
        put_code(word, 0, parts_.format, x);
        parts_.process(word, word, 1);
        return code_at(word, 0, parts_.format);
    }

private:
    FilterParts parts_;
};

/// In front of a filter that changes the rate faults are put around this.
class Taken : public CodeFilter {
public:
    void reset() override {}
    void reset_half() override {}
    std::int32_t step(std::int32_t x) override { return x; }
};

}  // namespace

OfferedFilter::OfferedFilter(FilterParts parts, const Faults& faults)
    : parts_(std::move(parts)), out_format_(parts_.format) {
    const std::vector<FilterParts> channels =
        parts_.channels.empty() ? std::vector<FilterParts>{parts_} : parts_.channels;
    if (channels.size() == 2) channel_faults_ = faults.channels;
    if (!parts_.channels_alike) channel_faults_.shared_state = false;
    if (faults.wrong_justification && has_spare_bits(parts_.format)) out_format_ = other_justification(parts_.format);
    const auto deviates = [&](const FilterParts& channel) {
        return faults.deviation.any() && channel.variant != nullptr;
    };
    if (faults.passage.empty() && !channel_faults_.any() && out_format_ == parts_.format &&
        std::none_of(channels.begin(), channels.end(), deviates)) {
        return;
    }
    for (const FilterParts& channel : channels) {
        std::unique_ptr<CodeFilter> filter;
        if (channel.process_rate) {
            filter = std::make_unique<Taken>();
        } else if (deviates(channel)) {
            filter = channel.variant(faults.deviation);
        } else {
            filter = std::make_unique<CleanSteps>(channel);
        }
        for (PassageFault fault : faults.passage) filter = with_fault(fault, channel.format, std::move(filter));
        faulty_.push_back(std::move(filter));
    }
}

void OfferedFilter::reset() {
    if (faulty_.empty() || parts_.process_rate) parts_.reset();
    for (const auto& channel : faulty_) channel->reset();
}

void OfferedFilter::process(const void* in, void* out, std::uint16_t count) {
    if (faulty_.empty()) {
        parts_.process(in, out, count);
        return;
    }
    const std::size_t channels = faulty_.size();
    std::vector<std::int32_t> codes(channels);
    for (const auto& channel : faulty_) channel->begin_block();
    for (std::size_t first = 0; first < channels * count; first += channels) {
        for (std::size_t c = 0; c < channels; ++c) codes[c] = code_at(in, first + c, parts_.format);
        if (channel_faults_.swapped) std::swap(codes[0], codes[1]);
        const std::int32_t leak = channel_faults_.crosstalk ? codes[0] >> 7 : 0;
        for (std::size_t c = 0; c < channels; ++c) {
            codes[c] = faulty_[channel_faults_.shared_state ? 0 : c]->step(codes[c]);
        }
        if (leak != 0) codes[1] = std::clamp(codes[1] + leak, -32768, 32767);  // pairs are q15
        for (std::size_t c = 0; c < channels; ++c) put_code(out, first + c, out_format_, codes[c]);
    }
}

std::uint16_t OfferedFilter::process_rate(const void* in, void* out, std::uint16_t count) {
    if (faulty_.empty()) return parts_.process_rate(in, out, count);
    faulty_[0]->begin_block();
    std::vector<std::int16_t> taken(count);  // the sets of these filters are q15
    for (std::size_t i = 0; i < count; ++i)
        put_code(taken.data(), i, parts_.format, faulty_[0]->step(code_at(in, i, parts_.format)));
    return parts_.process_rate(taken.data(), out, count);
}

bool OfferedFilter::load(std::uint8_t table, std::uint16_t offset, const std::int32_t* values, std::uint8_t count) {
    return parts_.load != nullptr && parts_.load(table, offset, values, count);
}

std::vector<FilterParts> choose_filters(std::string_view choice, std::vector<FilterParts> all, std::string& problem) {
    const auto set_of = [](const FilterParts& filter) -> std::string_view {
        if (filter.kind == FilterKind::decision) return "decisions";
        return filter.kind == FilterKind::rate ? "rates" : "all";
    };
    if (choice == "all" || choice == "decisions" || choice == "rates") {
        std::vector<FilterParts> set;
        std::copy_if(all.begin(), all.end(), std::back_inserter(set),
                     [&](const FilterParts& filter) { return set_of(filter) == choice; });
        return set;
    }
    if (choice == "cw-7") choice = checkweigher;
    std::vector<FilterParts> chosen;
    while (true) {
        const std::size_t comma = choice.find(',');
        const std::string_view name = choice.substr(0, comma);
        const auto found = std::find_if(all.begin(), all.end(), [&](const auto& f) { return f.name == name; });
        if (found == all.end()) {
            std::vector<std::string_view> known = {"all", "cw-7", "decisions", "rates"};
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

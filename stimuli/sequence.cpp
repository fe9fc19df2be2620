// Stimuli one after the other, and the whole of them again if asked.
#include <algorithm>

#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

class Sequence final : public Stimulus {
public:
    Sequence(std::vector<std::unique_ptr<const Stimulus>> parts, std::int64_t repeats) : parts_(std::move(parts)) {
        std::int64_t end = 0;
        for (const auto& part : parts_) ends_.push_back(end += part->length_samples());
        length_samples_ = end * repeats;
    }

    std::int64_t length_samples() const override { return length_samples_; }

    void fill(std::int64_t first_index, std::span<double> ratios) const override {
        // Counted from the front of the span, so that no sum of index and size can overflow.
        std::size_t done = 0;
        if (first_index < 0) {
            // -(first + 1) + 1, so that the lowest index of all has a size too.
            const std::uint64_t before = static_cast<std::uint64_t>(-(first_index + 1)) + 1;
            done = before < ratios.size() ? static_cast<std::size_t>(before) : ratios.size();
            std::fill_n(ratios.begin(), done, 0.0);
        }
        while (done < ratios.size()) {
            const std::int64_t index = first_index + static_cast<std::int64_t>(done);
            if (index >= length_samples_) break;
            const std::int64_t in_round = index % ends_.back();
            const auto part =
                static_cast<std::size_t>(std::upper_bound(ends_.begin(), ends_.end(), in_round) - ends_.begin());
            const auto left = static_cast<std::uint64_t>(ends_[part] - in_round);
            const std::size_t rest = ratios.size() - done;
            const std::size_t count = left < rest ? static_cast<std::size_t>(left) : rest;
            const std::int64_t begin = ends_[part] - parts_[part]->length_samples();
            parts_[part]->fill(in_round - begin, ratios.subspan(done, count));
            done += count;
        }
        std::fill(ratios.begin() + static_cast<std::ptrdiff_t>(done), ratios.end(), 0.0);
    }

    /// The continuous bands of the parts. Their tones are left out: a part's sine is no line over the whole
    /// record, its phase has nothing to do with that of the same sine in another part.
    Spectrum spectrum() const override {
        std::vector<Spectrum::Band> bands;
        for (const auto& part : parts_) {
            for (const Spectrum::Band& band : part->spectrum().bands) bands.push_back(band);
        }
        return {.bands = joined_bands(std::move(bands))};
    }

private:
    std::vector<std::unique_ptr<const Stimulus>> parts_;
    std::vector<std::int64_t> ends_;  ///< of each part, in one round
    std::int64_t length_samples_ = 0;
};

StimulusOutcome make_sequence(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    StimulusContext inner = context;
    inner.default_length_samples = std::nullopt;
    std::vector<std::unique_ptr<const Stimulus>> parts;
    const std::vector<StimulusWords> words = values.stimuli("parts");
    std::int64_t round_samples = 0;
    for (std::size_t i = 0; i < words.size(); ++i) {
        auto part = make_fitting_stimulus(words[i].shape, words[i].values, inner);
        if (!part) return inside("parts", i, part.error());
        round_samples += (*part)->length_samples();
        parts.push_back(std::move(*part));
    }
    const std::int64_t repeats = values.integer(recipe, "repeat").value_or(1);
    // At most 1000 parts of 1e10 samples, so the sum itself fits.
    if (round_samples > longest_stimulus_samples / repeats) {
        return refused(repeats > 1 ? "repeat" : "parts",
                       std::to_string(repeats) + " times " + std::to_string(round_samples) +
                           " samples are more than the longest stimulus, " + std::to_string(longest_stimulus_samples),
                       "make the parts shorter, or repeat them less often");
    }
    return std::unique_ptr<const Stimulus>(std::make_unique<Sequence>(std::move(parts), repeats));
}

}  // namespace

Shape sequence_shape() {
    return {{.name = "sequence",
             .help = "Stimuli one after the other; its length is that of its parts, times repeat.",
             .parameters =
                 {
                     {.name = "parts",
                      .type = ParameterType::stimuli,
                      .required = true,
                      .help = "The stimuli in order, each with its shape and length; at most 1000 in all, nested at "
                              "most 4 deep."},
                     {.name = "repeat",
                      .type = ParameterType::integer,
                      .minimum = 1.0,
                      .maximum = static_cast<double>(longest_stimulus_samples),
                      .default_value = 1.0,
                      .help = "How often the parts are gone through."},
                 }},
            make_sequence};
}

}  // namespace halflsb

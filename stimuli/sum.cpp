// `add`: stimuli on top of another one, sample by sample, in the order of the list.
#include <algorithm>
#include <array>

#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

/// Ascending; those that stand there twice are left out, because two sines of one frequency may cancel.
std::vector<double> once_only(std::vector<double> tones) {
    std::sort(tones.begin(), tones.end());
    std::vector<double> single;
    for (std::size_t i = 0; i < tones.size();) {
        std::size_t next = i + 1;
        while (next < tones.size() && tones[next] == tones[i]) ++next;
        if (next == i + 1) single.push_back(tones[i]);
        i = next;
    }
    return single;
}

/// The later of two indices; none when either is.
void note_steady(std::optional<std::int64_t> from, std::optional<std::int64_t>& latest) {
    latest = from && latest ? std::optional(std::max(*from, *latest)) : std::nullopt;
}

class Sum final : public Stimulus {
public:
    explicit Sum(std::vector<std::unique_ptr<const Stimulus>> summands) : summands_(std::move(summands)) {}

    std::int64_t length_samples() const override { return summands_.front()->length_samples(); }

    void fill(std::int64_t first_index, std::span<double> ratios) const override {
        constexpr std::size_t chunk_samples = 256;
        std::array<double, chunk_samples> addend{};
        summands_.front()->fill(first_index, ratios);
        for (std::size_t k = 1; k < summands_.size(); ++k) {
            for (std::size_t done = 0; done < ratios.size();) {
                const std::size_t count = std::min(chunk_samples, ratios.size() - done);
                summands_[k]->fill(first_index + static_cast<std::int64_t>(done), std::span(addend).first(count));
                for (std::size_t i = 0; i < count; ++i) ratios[done + i] += addend[i];
                done += count;
            }
        }
    }

    /// What the summands have. The tones of one that ends early are left out: they are lines only while
    /// they last, and the estimate takes the whole record. Of those with other realisations than the most,
    /// too: a phase that jumps within a stretch is no line of it, and one that stays makes the stretches alike.
    Spectrum spectrum() const override {
        Spectrum all;
        std::vector<Spectrum> lasting;
        all.steady_from_sample = 0;
        for (const auto& summand : summands_) {
            const Spectrum each = summand->spectrum();
            // One that ends early is silent from there on.
            const bool is_short = summand->length_samples() < length_samples();
            note_steady(is_short ? summand->length_samples() : each.steady_from_sample, all.steady_from_sample);
            all.bands.insert(all.bands.end(), each.bands.begin(), each.bands.end());
            if (is_short) continue;
            if (each.realisations.count > all.realisations.count) all.realisations = each.realisations;
            lasting.push_back(each);
        }
        for (const Spectrum& each : lasting) {
            if (each.realisations != all.realisations) continue;
            all.tones.insert(all.tones.end(), each.tones.begin(), each.tones.end());
        }
        all.bands = joined_bands(std::move(all.bands));
        const std::size_t tones = all.tones.size();
        all.tones = once_only(std::move(all.tones));
        // There is a tone then that is none of those that are told.
        if (all.tones.size() != tones) all.steady_from_sample.reset();
        return all;
    }

private:
    std::vector<std::unique_ptr<const Stimulus>> summands_;  ///< the first is the longest
};

}  // namespace

std::vector<Spectrum::Band> joined_bands(std::vector<Spectrum::Band> bands) {
    std::sort(bands.begin(), bands.end(), [](const Spectrum::Band& left, const Spectrum::Band& right) {
        return left.from_cycles_per_sample < right.from_cycles_per_sample;
    });
    std::vector<Spectrum::Band> apart;
    for (const Spectrum::Band& band : bands) {
        if (apart.empty() || band.from_cycles_per_sample > apart.back().to_cycles_per_sample) {
            apart.push_back(band);
        } else {
            double& end = apart.back().to_cycles_per_sample;
            end = std::max(end, band.to_cycles_per_sample);
        }
    }
    return apart;
}

Parameter add_parameter() {
    return {
        .name = "add",
        .type = ParameterType::stimuli,
        .help =
            "Stimuli added to this one, each with its shape, none longer; integer formats saturate beyond full scale."};
}

StimulusOutcome make_sum(std::unique_ptr<const Stimulus> base, const std::vector<StimulusWords>& added,
                         const StimulusContext& context) {
    StimulusContext inner = context;
    inner.default_length_samples = base->length_samples();
    std::vector<std::unique_ptr<const Stimulus>> summands;
    summands.push_back(std::move(base));
    for (std::size_t i = 0; i < added.size(); ++i) {
        auto summand = make_fitting_stimulus(added[i].shape, added[i].values, inner);
        if (!summand) return inside("add", i, summand.error());
        const std::int64_t longest = summands.front()->length_samples();
        const std::int64_t length = (*summand)->length_samples();
        if (length > longest) {
            return inside("add", i,
                          refused(added[i].values.has("parts") ? "parts" : "length_samples",
                                  std::to_string(length) + " samples are longer than the " + std::to_string(longest) +
                                      " that they are added to",
                                  "give at most " + std::to_string(longest)));
        }
        summands.push_back(std::move(*summand));
    }
    return std::unique_ptr<const Stimulus>(std::make_unique<Sum>(std::move(summands)));
}

}  // namespace halflsb

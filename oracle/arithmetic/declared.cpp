#include "oracle/arithmetic/declared.hpp"

#include <algorithm>
#include <vector>

#include "oracle/arithmetic/word_ends.hpp"
#include "oracle/filters/coefficients.hpp"

namespace halflsb {

namespace {

// Pieces that stay in the first-level cache while they pass the stages.
constexpr std::size_t piece_samples = 1024;

/// Stages up to one whose words have ends, or all that are left.
struct Stretch {
    std::unique_ptr<Filter> filter;
    std::optional<WordEnds> ends;  ///< none behind the last, whose ends are the output's
};

class DeclaredFilter final : public Filter {
public:
    DeclaredFilter(const FilterChain& design, const SampleFormat& output, double gain)
        : gain_(gain), ends_(output, design.empty() ? Overflow::saturate : design.back().arithmetic.output_overflow) {
        const FilterChain declared = declared_chain(design);
        FilterChain stages;
        for (std::size_t i = 0; i < declared.size(); ++i) {
            stages.push_back(declared[i]);
            const StageArithmetic& arithmetic = declared[i].arithmetic;
            if (!arithmetic.stage_format || i + 1 == declared.size()) continue;
            stretches_.push_back({make_filter(stages), WordEnds(*arithmetic.stage_format, arithmetic.output_overflow)});
            stages.clear();
        }
        stretches_.push_back({make_filter(stages), std::nullopt});
    }

    void reset() override {
        for (const Stretch& stretch : stretches_) stretch.filter->reset();
    }

    void process(std::span<const double> in, std::span<double> out) override {
        for (std::size_t done = 0; done < in.size(); done += piece_samples) {
            const std::size_t count = std::min(piece_samples, in.size() - done);
            process_piece(in.subspan(done, count), out.subspan(done, count));
        }
    }

private:
    void process_piece(std::span<const double> from, std::span<double> to) {
        for (const Stretch& stretch : stretches_) {
            stretch.filter->process(from, to);
            if (stretch.ends) stretch.ends->apply(to);
            from = to;
        }
        for (double& value : to) value *= gain_;
        ends_.apply(to);
    }

    std::vector<Stretch> stretches_;
    double gain_;
    WordEnds ends_;
};

}  // namespace

FilterChain declared_chain(const FilterChain& design) {
    FilterChain declared;
    declared.reserve(design.size());
    for (const FilterStage& stage : design) declared.push_back(with_rounded_coefficients(stage));
    return declared;
}

std::unique_ptr<Filter> make_declared_filter(const FilterChain& design, const SampleFormat& output, double gain) {
    return std::make_unique<DeclaredFilter>(design, output, gain);
}

}  // namespace halflsb

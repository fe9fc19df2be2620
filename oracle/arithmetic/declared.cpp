#include "oracle/arithmetic/declared.hpp"

#include <algorithm>
#include <limits>

#include "oracle/arithmetic/element_filter.hpp"
#include "oracle/filters/coefficients.hpp"

namespace halflsb {

namespace {

// Pieces that stay in the first-level cache while they pass the elements.
constexpr std::size_t piece_samples = 1024;

/// Element by element, as the rails are watched.
class DeclaredFilter final : public Filter {
public:
    DeclaredFilter(const DescribedChain& chain, double gain) : gain_(gain) {
        const ExactChain exact = exact_chain(chain);
        for (const ChainElement& element : chain_elements(chain, exact)) elements_.emplace_back(element);
        if (chain.stages.back().out.is_float) {
            highest_ = static_cast<double>(std::numeric_limits<float>::max());
            lowest_ = -highest_;
        } else if (chain.output_ends) {
            lowest_ = chain.output_ends->lowest;
            highest_ = chain.output_ends->highest;
        }
    }

    std::size_t outputs_for(std::size_t inputs) const override {
        for (const ElementFilter& element : elements_) inputs = element.outputs_for(inputs);
        return inputs;
    }

    void reset() override {
        for (ElementFilter& element : elements_) element.reset();
    }

    void process(std::span<const double> in, std::span<double> out) override {
        for (std::size_t done = 0; done < in.size(); done += piece_samples) {
            const auto piece = in.subspan(done, std::min(piece_samples, in.size() - done));
            const std::size_t count = outputs_for(piece.size());
            process_piece(piece, out.first(count));
            out = out.subspan(count);
        }
    }

private:
    void process_piece(std::span<const double> in, std::span<double> out) {
        from_.assign(in.begin(), in.end());
        for (ElementFilter& element : elements_) {
            for (auto* series : {&sums_, &held_, &to_}) series->resize(element.outputs_for(from_.size()));
            element.process(from_, sums_, held_, to_);
            from_.swap(to_);
        }
        for (std::size_t n = 0; n < out.size(); ++n) {
            // NaN compares false with both ends and stays.
            out[n] = std::clamp(from_[n] * gain_, lowest_, highest_);
        }
    }

    std::vector<ElementFilter> elements_;
    double gain_;
    double lowest_ = -std::numeric_limits<double>::infinity(), highest_ = std::numeric_limits<double>::infinity();
    std::vector<double> from_, to_, sums_, held_;
};

}  // namespace

FilterChain declared_chain(const FilterChain& design) {
    FilterChain declared;
    declared.reserve(design.size());
    for (const FilterStage& stage : design) declared.push_back(with_rounded_coefficients(stage));
    return declared;
}

std::unique_ptr<Filter> make_declared_filter(const DescribedChain& chain, double gain) {
    return std::make_unique<DeclaredFilter>(chain, gain);
}

}  // namespace halflsb

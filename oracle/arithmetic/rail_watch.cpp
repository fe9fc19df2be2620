#include "oracle/arithmetic/rail_watch.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/rail_element.hpp"
#include "oracle/arithmetic/reference_error.hpp"
#include "oracle/filters/rates.hpp"

namespace halflsb {

namespace {

/// Samples that what stands behind an element remembers; none: for ever.
std::optional<std::int64_t> memory_behind(const std::vector<ChainElement>& elements, std::size_t at) {
    std::int64_t memory = 0;
    for (std::size_t k = at + 1; k < elements.size(); ++k) {
        const ChainElement& element = elements[k];
        if (element.is_recursive()) return std::nullopt;
        if (rate_ratio(element.exact) != RateRatio{}) return std::nullopt;
        const bool keeps_sum = element.is_integer() && element.stage->structure == Structure::running_sum &&
                               element.stage->accumulator_overflow == Overflow::saturate;
        const bool keeps_float_sum = !element.is_integer() && element.stage->structure == Structure::running_sum;
        const FilterDesign& design = element.exact.front().design;
        if (const auto* average = std::get_if<MovingAverage>(&design)) {
            if (keeps_sum || keeps_float_sum) return std::nullopt;
            memory += average->points - 1;
        } else if (const auto* fir = std::get_if<Fir>(&design)) {
            memory += static_cast<std::int64_t>(fir->taps.size()) - 1;
        } else if (const auto* median = std::get_if<Median>(&design)) {
            memory += median->points - 1;
        } else {
            // A section, recursion or comb without feedback.
            memory += element.comb() ? element.comb()->delay_samples : std::ssize(element.forward) - 1;
        }
    }
    return memory;
}

}  // namespace

std::string_view name_of(RailEffect effect) {
    if (effect == RailEffect::clip) return "clip";
    return effect == RailEffect::exempt ? "exempt" : "lost";
}

class RailWatch::Pass {
public:
    explicit Pass(const DescribedChain& chain) : chain_(chain) {
        const NodeBounds bounds(chain_);
        const auto elements = chain_elements(chain_, bounds.exact());
        ElementInput input;
        // A float input can be anything: no rail is out of its reach.
        const Port& in = chain.stages.front().in;
        input.full_scale = input.level = in.is_float ? HUGE_VAL : largest_value(in);
        for (std::size_t k = 0; k < elements.size(); ++k) {
            const auto memory = memory_behind(elements, k);
            elements_.emplace_back(elements[k], bounds, input, elements.size() == 1, memory.has_value());
            memory_.push_back(memory.value_or(0));
            FilterChain behind;
            for (std::size_t j = k + 1; j < elements.size(); ++j) {
                behind.insert(behind.end(), elements[j].exact.begin(), elements[j].exact.end());
            }
            behind_.push_back(std::move(behind));
            input = elements_.back().output();
            if (elements_.back().is_watched()) watched_ = elements_.size();
            const auto& nodes = elements_.back().nodes();
            nodes_.insert(nodes_.end(), nodes.begin(), nodes.end());
        }
        indices_.assign(elements_.size(), 0);
        changes_rate_ = changes_rate(bounds.exact().stages);
    }

    void reset() {
        for (RailElement& element : elements_) element.reset();
        next_index_ = exempt_until_ = left_over_ = 0;
        std::fill(indices_.begin(), indices_.end(), std::int64_t{0});
        lost_.reset();
        unsafe_.reset();
        clip_.reset();
        unsafe_node_.clear();
    }

    std::size_t outputs_for(std::size_t inputs) const {
        for (const RailElement& element : elements_) inputs = element.outputs_for(inputs);
        return inputs;
    }

    void add(std::span<const double> in, std::span<std::uint8_t> exempt) {
        const std::int64_t first = next_index_;
        next_index_ += static_cast<std::int64_t>(exempt.size());
        from_.assign(in.begin(), in.end());
        std::fill(exempt.begin(), exempt.end(), std::uint8_t{0});
        for (std::size_t k = 0; k < elements_.size(); ++k) {
            // Behind the last rail that is watched nothing needs to run but what counts outputs.
            if (k >= watched_ && !changes_rate_) break;
            to_.resize(elements_[k].outputs_for(from_.size()));
            reached_.resize(to_.size());
            elements_[k].process(from_, to_, reached_);
            if (elements_[k].is_watched()) note(k, exempt);
            indices_[k] += static_cast<std::int64_t>(to_.size());
            from_.swap(to_);
        }
        close(first, exempt);
    }

    std::optional<std::int64_t> lost_, unsafe_, clip_;
    std::string unsafe_node_;
    std::vector<RailNode> nodes_;

private:
    void note(std::size_t k, std::span<std::uint8_t> exempt) {
        for (std::size_t n = 0; n < reached_.size(); ++n) {
            if (reached_[n] == 0) continue;
            const RailNode& node = elements_[k].nodes()[reached_[n] - 1U];
            // The first output of the chain that can have met this one of the element.
            const std::int64_t index = outputs_after(behind_[k], indices_[k] + static_cast<std::int64_t>(n));
            clip_ = std::min(clip_.value_or(index), index);
            if (node.effect == RailEffect::clip) continue;
            if (!unsafe_ || index < *unsafe_) {
                unsafe_ = index;
                unsafe_node_ = node.name;
            }
            if (node.effect == RailEffect::lost) {
                lost_ = std::min(lost_.value_or(index), index);
                return;
            }
            for (std::size_t m = n; m < exempt.size() && m <= n + static_cast<std::size_t>(memory_[k]); ++m) {
                exempt[m] = 1;
            }
            exempt_until_ = std::max(exempt_until_, index + memory_[k] + 1);
        }
    }

    // What blocks before have left, and what is lost.
    void close(std::int64_t first, std::span<std::uint8_t> exempt) {
        for (std::size_t n = 0; n < exempt.size(); ++n) {
            const std::int64_t index = first + static_cast<std::int64_t>(n);
            if (index < left_over_ || (lost_ && index >= *lost_)) exempt[n] = 1;
        }
        left_over_ = std::max(left_over_, exempt_until_);
    }

    const DescribedChain chain_;  ///< the elements point into it
    std::vector<RailElement> elements_;
    std::vector<std::int64_t> memory_;
    std::vector<FilterChain> behind_;    ///< from each element's output to that of the chain
    std::vector<std::int64_t> indices_;  ///< of the next output of each element
    bool changes_rate_ = false;
    std::size_t watched_ = 0;  ///< elements up to the last one that has a rail to watch
    std::int64_t next_index_ = 0, exempt_until_ = 0, left_over_ = 0;
    std::vector<double> from_, to_;
    std::vector<std::uint8_t> reached_;
};

RailWatch::RailWatch(const DescribedChain& chain) : pass_(std::make_unique<Pass>(chain)) {}
RailWatch::~RailWatch() = default;
RailWatch::RailWatch(RailWatch&&) noexcept = default;
RailWatch& RailWatch::operator=(RailWatch&&) noexcept = default;

void RailWatch::reset() { pass_->reset(); }
std::size_t RailWatch::outputs_for(std::size_t inputs) const { return pass_->outputs_for(inputs); }
void RailWatch::add(std::span<const double> in, std::span<std::uint8_t> exempt) { pass_->add(in, exempt); }
std::optional<std::int64_t> RailWatch::first_unsafe_index() const { return pass_->unsafe_; }
std::optional<std::int64_t> RailWatch::lost_from() const { return pass_->lost_; }
std::optional<std::int64_t> RailWatch::first_clip_index() const { return pass_->clip_; }
std::string RailWatch::unsafe_node() const { return pass_->unsafe_node_; }
const std::vector<RailNode>& RailWatch::nodes() const { return pass_->nodes_; }

}  // namespace halflsb

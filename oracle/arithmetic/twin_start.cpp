#include "oracle/arithmetic/twin_start.hpp"

#include "oracle/arithmetic/family.hpp"
#include "oracle/arithmetic/float_ports.hpp"
#include "oracle/arithmetic/word_register.hpp"
#include "oracle/filters/rates.hpp"

namespace halflsb {

namespace {

/// How many samples of the past a stage without feedback looks at; of a decimator whole groups, so that it stands where
/// it stood.
std::size_t samples_before(const FilterDesign& design) {
    std::size_t samples = 0;
    if (const auto* average = std::get_if<MovingAverage>(&design)) samples = static_cast<std::size_t>(average->points);
    if (const auto* median = std::get_if<Median>(&design)) samples = static_cast<std::size_t>(median->points);
    if (const auto* fir = std::get_if<Fir>(&design)) samples = fir->taps.size();
    if (const auto* decimator = std::get_if<FirDecimator>(&design)) samples = decimator->taps.size();
    const auto group = static_cast<std::size_t>(rate_ratio(design).down);
    return (samples + group - 1) / group * group;
}

/// The state of a one-pole that rests at a word of the input.
std::int64_t resting_state(const DescribedStage& stage, std::int64_t x) {
    if (stage.number == NumberKind::float32) return bits_of_float(FloatInput(stage.in)(x));
    const Word& word = stage.state;
    const Int128 raised = shifted_up(Int128{x}, word.fraction_bits - stage.in.word.fraction_bits, word.overflow);
    return static_cast<std::int64_t>(Register<Int128>("", word).hold(raised));
}

class StartedTwin final : public StageTwin {
public:
    StartedTwin(std::unique_ptr<StageTwin> twin, const DescribedStage& stage) : twin_(std::move(twin)), stage_(stage) {}

    void reset() override {
        twin_->reset();
        has_started_ = false;
    }

    std::size_t outputs_for(std::size_t inputs) const override { return twin_->outputs_for(inputs); }

    void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) override {
        if (!has_started_ && !in.empty()) start_with(in.front());
        twin_->process(in, out);
    }

    void append_state(std::vector<std::int64_t>& state) const override {
        twin_->append_state(state);
        state.push_back(has_started_ ? 1 : 0);
    }

    bool take_state(std::span<const std::int64_t>& state) override {
        if (!twin_->take_state(state) || state.empty()) return false;
        const std::int64_t flag = state.front();
        has_started_ = flag == 1;
        state = state.subspan(1);
        return flag == 0 || flag == 1;
    }

    void append_reaches(std::vector<NodeReach>& reaches) const override { twin_->append_reaches(reaches); }

private:
    void start_with(std::int64_t x) {
        std::vector<std::int64_t> state;
        if (family_of(stage_.stage) == Family::one_pole) {
            state.push_back(resting_state(stage_, x));
        } else {
            const std::vector<std::int64_t> before(samples_before(stage_.stage.design), x);
            std::vector<std::int64_t> unused(twin_->outputs_for(before.size()));
            twin_->process(before, unused);
            twin_->append_state(state);
        }
        // What was reached on the way to this state is no sample's.
        twin_->reset();
        std::span<const std::int64_t> words = state;
        twin_->take_state(words);
        has_started_ = true;
    }

    std::unique_ptr<StageTwin> twin_;
    DescribedStage stage_;
    bool has_started_ = false;
};

}  // namespace

std::unique_ptr<StageTwin> started_with_first_sample(std::unique_ptr<StageTwin> twin, const DescribedStage& stage) {
    if (twin == nullptr) return nullptr;
    return std::make_unique<StartedTwin>(std::move(twin), stage);
}

}  // namespace halflsb

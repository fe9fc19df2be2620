#include "oracle/arithmetic/twin.hpp"

#include "oracle/arithmetic/kept_samples.hpp"
#include "oracle/arithmetic/stage_twin.hpp"
#include "oracle/arithmetic/twin_start.hpp"
#include "oracle/filters/coefficients.hpp"

namespace halflsb {

namespace {

constexpr std::size_t piece_samples = 1024;

class ChainTwin final : public Twin {
public:
    ChainTwin(std::vector<std::unique_ptr<StageTwin>> stages, const Port& in, const Port& out)
        : stages_(std::move(stages)), zero_in_(in.zero_code), zero_out_(out.zero_code) {}

    void reset() override {
        for (const auto& stage : stages_) stage->reset();
    }

    std::size_t outputs_for(std::size_t inputs) const override {
        for (const auto& stage : stages_) inputs = stage->outputs_for(inputs);
        return inputs;
    }

    void process(std::span<const Code> in, std::span<Code> out) override {
        while (!in.empty()) {
            const std::size_t count = std::min(piece_samples, in.size());
            const std::size_t written = process_piece(in.first(count), out);
            in = in.subspan(count);
            out = out.subspan(written);
        }
    }

    std::vector<std::int64_t> state() const override {
        std::vector<std::int64_t> words;
        for (const auto& stage : stages_) stage->append_state(words);
        return words;
    }

    bool set_state(std::span<const std::int64_t> words) override {
        bool is_state = true;
        for (const auto& stage : stages_) is_state = is_state && stage->take_state(words);
        if (is_state && words.empty()) return true;
        reset();
        return false;
    }

    std::vector<NodeReach> reaches() const override {
        std::vector<NodeReach> all;
        for (const auto& stage : stages_) stage->append_reaches(all);
        return all;
    }

private:
    std::size_t process_piece(std::span<const Code> in, std::span<Code> out) {
        from_.resize(in.size());
        for (std::size_t i = 0; i < in.size(); ++i) from_[i] = in[i] - zero_in_;
        for (const auto& stage : stages_) {
            to_.resize(stage->outputs_for(from_.size()));
            stage->process(from_, to_);
            from_.swap(to_);
        }
        for (std::size_t i = 0; i < from_.size(); ++i) out[i] = static_cast<Code>(from_[i] + zero_out_);
        return from_.size();
    }

    std::vector<std::unique_ptr<StageTwin>> stages_;
    std::int64_t zero_in_, zero_out_;
    std::vector<std::int64_t> from_, to_;
};

/// Between the sections of a float32 cascade.
Port passed_float() {
    Port port;
    port.is_float = true;
    return port;
}

Recurrence recurrence_of(const BiquadSection& s, std::string_view kind) {
    if (kind == "one-pole") return {{s.b0}, {s.a1}, true};
    if (kind == "dc-blocker") return {{s.b0, s.b1}, {s.a1}, false};
    return {{s.b0, s.b1, s.b2}, {s.a1, s.a2}, false};
}

Recurrence recurrence_of(const Recursion& recursion) {
    return {recursion.b, {recursion.a.begin() + 1, recursion.a.end()}, false};
}

std::unique_ptr<StageTwin> make_section(const DescribedStage& stage, const Recurrence& section,
                                        const std::string& name) {
    if (stage.number == NumberKind::float32) return make_float_section_twin(stage, section, name);
    switch (stage.structure) {
        case Structure::direct_2:
            return make_direct_2_twin(stage, section, name);
        case Structure::transposed_2:
            return make_transposed_2_twin(stage, section, name);
        case Structure::difference:
        case Structure::leak:
            return make_one_pole_twin(stage, name);
        default:
            return make_direct_1_twin(stage, section, name);
    }
}

using StageTwins = std::vector<std::unique_ptr<StageTwin>>;

/// The twins of one stage, by its design.
class StageMaker {
public:
    StageMaker(const DescribedStage& stage, std::string name, StageTwins& twins)
        : stage_(stage), is_float_(stage.number == NumberKind::float32), name_(std::move(name)), twins_(twins) {}

    void operator()(const MovingAverage&) { add(is_float_ ? make_float_average_twin : make_moving_average_twin); }
    void operator()(const Comb&) { add(is_float_ ? make_float_comb_twin : make_comb_twin); }
    void operator()(const Median&) { add(make_median_twin); }
    void operator()(const CicDecimator&) { add_cic(); }
    void operator()(const CicInterpolator&) { add_cic(); }
    void operator()(const Fir& fir) { add_fir(fir.taps, {}); }
    void operator()(const FirDecimator& fir) {
        add_fir(fir.taps, {static_cast<std::size_t>(fir.factor), static_cast<std::size_t>(fir.phase_samples)});
    }
    void operator()(const FirInterpolator& fir) {
        twins_.push_back(std::make_unique<ZeroStuffing>(static_cast<std::size_t>(fir.factor)));
        add_fir(fir.taps, {});
    }
    void operator()(const Recursion& recursion) {
        twins_.push_back(make_section(stage_, recurrence_of(recursion), name_));
    }

    void operator()(const BiquadCascade& cascade) {
        const auto& sections = cascade.sections;
        DescribedStage section = stage_;
        for (std::size_t i = 0; i < sections.size(); ++i) {
            const bool is_last = i + 1 == sections.size();
            section.out = stage_.out;
            // Sections that only the last one shortens pass on what they keep.
            if (stage_.rounding_at == RoundingAt::output && !is_last) section.out.word = stage_.state;
            if (is_float_ && !is_last) section.out = passed_float();
            const std::string of = sections.size() == 1 ? name_ : name_ + "section " + std::to_string(i + 1) + ", ";
            twins_.push_back(make_section(section, recurrence_of(sections[i], stage_.stage.kind), of));
            section.in = section.out;
        }
    }

private:
    void add(std::unique_ptr<StageTwin> (*make)(const DescribedStage&, const std::string&)) {
        twins_.push_back(make(stage_, name_));
    }
    void add_fir(const std::vector<double>& taps, Kept kept) {
        twins_.push_back((is_float_ ? make_float_fir_twin : make_fir_twin)(stage_, taps, kept, name_));
    }
    // What integrators in float32 lose no comb brings back: there is no twin of that.
    void add_cic() { twins_.push_back(is_float_ ? nullptr : make_cic_twin(stage_, name_)); }

    const DescribedStage& stage_;
    bool is_float_;
    std::string name_;
    StageTwins& twins_;
};

void append_stage(const DescribedStage& stage, std::string name, StageTwins& twins) {
    // Of integer stages the coefficients are stored by those who multiply; floats are made of the rounded ones.
    const FilterStage coefficients =
        stage.number == NumberKind::float32 ? with_rounded_coefficients(stage.stage) : stage.stage;
    std::visit(StageMaker(stage, std::move(name), twins), coefficients.design);
    // describe() lets that be said of stages alone that are one twin.
    if (stage.stage.initial == Initial::first_sample)
        twins.back() = started_with_first_sample(std::move(twins.back()), stage);
}

}  // namespace

std::unique_ptr<Twin> make_twin(const DescribedChain& chain) {
    if (chain.missing || chain.stages.empty()) return nullptr;
    StageTwins twins;
    for (std::size_t i = 0; i < chain.stages.size(); ++i) {
        append_stage(chain.stages[i], "stage " + std::to_string(i + 1) + ", ", twins);
    }
    for (const auto& twin : twins) {
        if (twin == nullptr) return nullptr;
    }
    return std::make_unique<ChainTwin>(std::move(twins), chain.stages.front().in, chain.stages.back().out);
}

}  // namespace halflsb

#include "oracle/arithmetic/twin.hpp"

#include <array>

#include "oracle/arithmetic/family.hpp"
#include "oracle/arithmetic/stage_twin.hpp"
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

std::unique_ptr<StageTwin> make_section(const DescribedStage& stage, const Recurrence& section,
                                        const std::string& name) {
    if (stage.number == NumberKind::float32) return make_float_twin(stage, &section, name);
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

void append_cascade(const DescribedStage& described, const std::string& name, StageTwins& twins) {
    const FilterStage coefficients =
        described.number == NumberKind::float32 ? with_rounded_coefficients(described.stage) : described.stage;
    const auto& sections = std::get<BiquadCascade>(coefficients.design).sections;
    DescribedStage section = described;
    for (std::size_t i = 0; i < sections.size(); ++i) {
        section.out = described.out;
        // Sections that only the last one shortens pass on what they keep.
        const bool is_last = i + 1 == sections.size();
        if (described.rounding_at == RoundingAt::output && !is_last) section.out.word = described.state;
        if (described.number == NumberKind::float32 && !is_last) section.out = passed_float();
        const std::string of = sections.size() == 1 ? name : name + "section " + std::to_string(i + 1) + ", ";
        twins.push_back(make_section(section, recurrence_of(sections[i], described.stage.kind), of));
        section.in = section.out;
    }
}

void append_stage(const DescribedStage& stage, const std::string& name, StageTwins& twins) {
    if (std::holds_alternative<BiquadCascade>(stage.stage.design)) {
        append_cascade(stage, name, twins);
    } else if (stage.number == NumberKind::float32) {
        twins.push_back(make_float_twin(stage, nullptr, name));
    } else if (std::holds_alternative<Fir>(stage.stage.design)) {
        twins.push_back(make_fir_twin(stage, name));
    } else if (std::holds_alternative<MovingAverage>(stage.stage.design)) {
        twins.push_back(make_moving_average_twin(stage, name));
    } else if (std::holds_alternative<Comb>(stage.stage.design)) {
        twins.push_back(make_comb_twin(stage, name));
    } else {
        twins.push_back(nullptr);
    }
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

// CIC decimators and interpolators as firmware has them: integrators and combs in registers that end at one top bit.
//
// Registers that wrap and hold the last comb lose nothing (E. B. Hogenauer, "An economical class of digital filters
// for decimation and interpolation", 1981) but what a decimator discards at their low ends. Where nobody said a width,
// they have just that.
#include "oracle/arithmetic/cic_registers.hpp"
#include "oracle/arithmetic/history.hpp"
#include "oracle/arithmetic/kept_samples.hpp"
#include "oracle/arithmetic/quotient.hpp"
#include "oracle/arithmetic/stage_twin.hpp"
#include "oracle/filters/rates.hpp"

namespace halflsb {

namespace {

struct CicPlan {
    std::size_t order = 1, factor = 2, delay = 1;
    bool decimates = true;
    std::size_t phase = 0;       ///< of what decimates
    Word registers;              ///< of one that discards nothing
    std::vector<int> discarded;  ///< low bits that integrators, then combs no longer have; one each

    Word word(std::size_t j) const {
        Word word = registers;
        word.bits -= discarded[j];
        word.fraction_bits -= discarded[j];
        return word;
    }
    int dropped_before(std::size_t j) const { return discarded[j] - (j == 0 ? 0 : discarded[j - 1]); }
};

class CicTwin final : public StageTwin {
public:
    CicTwin(const CicPlan& plan, const Quotient& quotient, const Word& out, const std::string& name)
        : plan_(plan),
          quotient_(quotient),
          last_(name + name_of_register(plan.decimates ? 2 * plan.order : plan.order), plan.word(2 * plan.order - 1)),
          output_(name + "output", out),
          integrals_(plan.order, 0),
          past_(plan.order, History<std::int64_t>(plan.delay)),
          kept_({plan.factor, plan.phase}) {
        for (std::size_t k = 1; k <= plan.order; ++k) {
            integrators_.emplace_back(name + name_of_register(k), plan.word(k - 1));
            combs_.emplace_back(name + name_of_register(plan.order + k), plan.word(plan.order + k - 1));
        }
        for (std::size_t j = 0; j < 2 * plan.order; ++j) drops_.push_back(plan.dropped_before(j));
    }

    void reset() override {
        for (auto* list : {&integrators_, &combs_}) {
            for (Register<Int128>& word : *list) word.reset();
        }
        last_.reset();
        output_.reset();
        std::fill(integrals_.begin(), integrals_.end(), 0);
        for (auto& past : past_) past.reset();
        kept_.reset();
    }

    std::size_t outputs_for(std::size_t inputs) const override {
        return plan_.decimates ? kept_.count_of(inputs) : inputs * plan_.factor;
    }

    void process(std::span<const std::int64_t> in, std::span<std::int64_t> out) override {
        std::size_t written = 0;
        for (const std::int64_t x : in) {
            if (plan_.decimates) {
                const Int128 integral = integrated(x);
                if (kept_.keeps()) out[written++] = returned(combed(integral));
            } else {
                Int128 next = combed(x);
                for (std::size_t k = 0; k < plan_.factor; ++k) {
                    out[written++] = returned(integrated(next));
                    next = 0;
                }
            }
        }
    }

    void append_state(std::vector<std::int64_t>& state) const override {
        const auto put = [&](std::int64_t word) { state.push_back(word); };
        for (const Int128 integral : integrals_) put(static_cast<std::int64_t>(integral));
        for (const auto& past : past_) past.for_each_newest_first(plan_.delay, put);
        if (plan_.decimates) put(kept_.state());
    }

    bool take_state(std::span<const std::int64_t>& state) override {
        const std::size_t combs = plan_.order * plan_.delay;
        if (state.size() < plan_.order + combs + (plan_.decimates ? 1 : 0)) return false;
        for (std::size_t k = 0; k < plan_.order; ++k) {
            const auto past = state.subspan(plan_.order + k * plan_.delay, plan_.delay);
            if (!integrators_[k].holds(state[k])) return false;
            for (const std::int64_t word : past) {
                if (!combs_[k].holds(word)) return false;
            }
            integrals_[k] = state[k];
            past_[k].set(past);
        }
        state = state.subspan(plan_.order + combs);
        if (!plan_.decimates) return true;
        const std::int64_t until_next = state.front();
        state = state.subspan(1);
        return kept_.set_state(until_next);
    }

    void append_reaches(std::vector<NodeReach>& reaches) const override {
        // What wraps on its way says nothing; the last register is the one that must hold, and what it holds is right.
        if (plan_.registers.overflow == Overflow::saturate) {
            for (const auto* list : {&integrators_, &combs_}) {
                for (const Register<Int128>& word : *list) reaches.push_back(word.reach());
            }
        } else {
            reaches.push_back(last_.reach());
        }
        reaches.push_back(output_.reach());
    }

private:
    std::string name_of_register(std::size_t j) const {
        return name_of_cic_register(static_cast<int>(plan_.order), static_cast<int>(j));
    }
    Int128 integrated(Int128 number) {
        for (std::size_t k = 0; k < plan_.order; ++k) {
            number = integrals_[k] = integrators_[k].hold(integrals_[k] + (number >> drops_[k]));
        }
        return number;
    }
    Int128 combed(Int128 number) {
        for (std::size_t k = 0; k < plan_.order; ++k) {
            const Int128 before = past_[k].ago(plan_.delay);
            number >>= drops_[plan_.order + k];
            past_[k].push(static_cast<std::int64_t>(number));
            number = combs_[k].hold(number - before);
        }
        return number;
    }
    std::int64_t returned(Int128 number) {
        last_.hold(number);
        return static_cast<std::int64_t>(output_.hold(quotient_(number)));
    }

    CicPlan plan_;
    Quotient quotient_;
    std::vector<Register<Int128>> integrators_, combs_;
    Register<Int128> last_, output_;  ///< last: what the last register holds, after its wrap
    std::vector<int> drops_;          ///< low bits that go before each integrator, then each comb
    std::vector<Int128> integrals_;
    std::vector<History<std::int64_t>> past_;  ///< what went into each comb
    KeptSamples kept_;
};

template <class Cic>
std::unique_ptr<StageTwin> make(const DescribedStage& stage, const Cic& design, bool decimates,
                                const std::string& name) {
    CicPlan plan{static_cast<std::size_t>(design.order),
                 static_cast<std::size_t>(design.factor),
                 static_cast<std::size_t>(design.delay_samples),
                 decimates,
                 static_cast<std::size_t>(phase_samples_of(design)),
                 stage.state,
                 stage.discarded_bits};
    // Saturation never comes where nobody limited the registers.
    if (stage.state.bits == wide_bits)
        plan.registers = {cic_register_bits(stage), stage.in.word.fraction_bits, Overflow::wrap};
    if (plan.registers.bits > 64) return nullptr;
    if (plan.discarded.empty()) plan.discarded.assign(2 * plan.order, 0);
    const Word last = plan.word(2 * plan.order - 1);
    Division128 division{.up = stage.out.word.fraction_bits - last.fraction_bits,
                         .rounding = stage.rounding,
                         .largest_number = largest_number(last)};
    if (design.shift_bits) {
        division.up -= *design.shift_bits;
    } else {
        for (int k = 0; k < design.order; ++k) {
            division.divisor *= design.delay_samples;
            if (decimates || k > 0) division.divisor *= design.factor;
        }
    }
    const auto quotient = Quotient::of(division);
    if (!quotient) return nullptr;
    return std::make_unique<CicTwin>(plan, *quotient, stage.out.word, name);
}

}  // namespace

std::unique_ptr<StageTwin> make_cic_twin(const DescribedStage& stage, const std::string& name) {
    if (const auto* decimator = std::get_if<CicDecimator>(&stage.stage.design)) {
        return make(stage, *decimator, true, name);
    }
    return make(stage, std::get<CicInterpolator>(stage.stage.design), false, name);
}

}  // namespace halflsb

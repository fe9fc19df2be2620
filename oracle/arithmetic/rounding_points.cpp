// Which sums each structure has, and where they go: docs/arithmetic.md, "Stages".
#include "oracle/arithmetic/rounding_points.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <limits>

#include "oracle/arithmetic/cic_registers.hpp"
#include "oracle/arithmetic/section_points.hpp"
#include "oracle/filters/cic.hpp"

namespace halflsb {

namespace {

constexpr double unlimited = std::numeric_limits<double>::infinity();

double power_of_two(int exponent) { return std::ldexp(1.0, exponent); }

class StagePoints {
public:
    StagePoints(const DescribedChain& chain, const ExactChain& exact, std::size_t index, const UsedBits& used)
        : here_(chain, exact, index, used) {}

    /// Of what find() has left the stage.
    UsedBits used_out() const { return {here_.in_spare, here_.sums.coarsest_step, here_.may_lean()}; }

    std::vector<RoundingPoint> find() {
        const FilterDesign& design = here_.exact.stages[here_.exact.first_of[here_.index]].design;
        if (const auto* fir = std::get_if<Fir>(&design)) {
            of_fir(*fir);
        } else if (const auto* average = std::get_if<MovingAverage>(&design)) {
            of_average(*average);
        } else if (const auto* comb = std::get_if<Comb>(&design)) {
            of_comb(*comb);
        } else if (const auto* cascade = std::get_if<BiquadCascade>(&design)) {
            of_cascade(*cascade);
        } else if (const auto* recursion = std::get_if<Recursion>(&design)) {
            add_section(here_, {recursion->b, {recursion->a.begin() + 1, recursion->a.end()}}, 0, true);
        } else if (const auto* decimator = std::get_if<FirDecimator>(&design)) {
            of_fir(Fir{decimator->taps});
        } else if (const auto* interpolator = std::get_if<FirInterpolator>(&design)) {
            of_fir(Fir{interpolator->taps});
        } else {
            of_output_alone(design);
        }
        return std::move(here_.sums.points);
    }

private:
    void of_fir(const Fir& fir) {
        std::vector<Term> terms;
        for (const double tap : fir.taps) terms.push_back(here_.term(tap, here_.stage.in.word));
        SumTarget target = here_.behind("sum");
        target.saves_fraction = here_.stage.fraction_saving;
        here_.sums.add_sum(std::move(terms), target);
        here_.set_spare_out(here_.bits_of_products(fir.taps, here_.in_bits()));
    }

    // S / points, or S R 2^-f, in steps of the output.
    void of_average(const MovingAverage& average) {
        SumTarget target = here_.behind("division");
        target.saves_fraction = here_.stage.fraction_saving;
        int bits = here_.stage.in.word.fraction_bits - here_.stage.out.word.fraction_bits;
        double odd = 1.0;
        if (here_.stage.division == Division::reciprocal) {
            const std::int64_t stored = stored_coefficient(here_.stage, 1.0 / average.points);
            bits += here_.stage.coefficient_fraction_bits - std::countr_zero(static_cast<std::uint64_t>(stored));
        } else {
            // The powers of two of points stand with the bits; what is odd divides nothing away.
            int points = average.points;
            for (; points % 2 == 0; points /= 2) ++bits;
            odd = points;
        }
        const double top = std::ldexp(
            1.0, here_.stage.in.word.bits - 1 - here_.stage.in.word.fraction_bits + here_.stage.out.word.fraction_bits);
        const bool is_exact = !target.saves_fraction && here_.stage.division != Division::reciprocal;
        const auto parts_of = [odd](int fraction_bits) { return odd * power_of_two(std::max(0, fraction_bits)); };
        here_.sums.add_shortening(target, {parts_of(bits), is_exact ? -top : -unlimited, is_exact ? top : unlimited,
                                           parts_of(bits - here_.in_spare), here_.in_may_lean});
        here_.set_spare_out(here_.stage.out.word.fraction_bits + (odd == 1.0 ? bits - here_.in_spare : 0));
    }

    void of_comb(const Comb& comb) {
        here_.find_spare_of_state({comb.direct, comb.forward}, {comb.feedback});
        SumTarget target = here_.at_section("sum", 0, RoundingPoint::Place::loop);
        target.saves_fraction = here_.stage.fraction_saving;
        target.fraction_bits = here_.stage.state.fraction_bits;
        here_.sums.add_sum({here_.term(comb.direct, here_.stage.in.word), here_.term(comb.forward, here_.stage.in.word),
                            here_.feedback(comb.feedback, here_.stage.state)},
                           target);
        here_.add_output(0);
        here_.set_spare_out(here_.result_bits);
    }

    // What a register no longer has is cut off, whatever the rounding of the stage.
    void of_discards(const CicDecimator& cic) {
        for (std::size_t k = 0; k < here_.stage.discarded_bits.size(); ++k) {
            const int dropped = here_.stage.discarded_bits[k] - (k == 0 ? 0 : here_.stage.discarded_bits[k - 1]);
            if (dropped == 0) continue;
            const SumTarget target = here_.behind(name_of_cic_register(cic.order, static_cast<int>(k) + 1));
            RoundingPoint point = here_.sums.point_at(target);
            point.step = power_of_two(here_.stage.discarded_bits[k] - here_.stage.in.word.fraction_bits);
            point.parts = power_of_two(dropped);
            point.error = rounding_error(Rounding::floor, {point.parts, -unlimited, unlimited}).times(point.step);
            point.variance_each = point.error.variance;
            point.is_of_input = k == 0;
            point.inside = path_from_register(cic, static_cast<int>(k) + 1);
            here_.sums.points.push_back(std::move(point));
        }
    }

    // A median errs where it takes a mean of two, a CIC where it leaves its registers and where these discard.
    void of_output_alone(const FilterDesign& design) {
        SumTarget target = here_.behind("output");
        int bits = here_.stage.in.word.fraction_bits - here_.stage.out.word.fraction_bits;
        if (const auto* cic = std::get_if<CicDecimator>(&design)) of_discards(*cic);
        if (!here_.stage.discarded_bits.empty()) bits -= here_.stage.discarded_bits.back();
        double parts = unlimited, usual_parts = 0.0;
        if (const auto* median = std::get_if<Median>(&design)) {
            if (median->points % 2 == 0) ++bits;
            parts = power_of_two(std::max(0, bits));
        } else if (const auto* cic = std::get_if<CicDecimator>(&design); cic && cic->shift_bits) {
            parts = power_of_two(std::max(0, bits + *cic->shift_bits));
        } else if (const auto* raised = std::get_if<CicInterpolator>(&design); raised && raised->shift_bits) {
            parts = power_of_two(std::max(0, bits + *raised->shift_bits));
        } else {
            // A CIC that divides in some way: its remainders are those of the divisor.
            const auto* up = std::get_if<CicInterpolator>(&design);
            const double divisor = up != nullptr ? divisor_of(*up) : divisor_of(std::get<CicDecimator>(design));
            usual_parts = std::max(1.0, std::ldexp(divisor, bits));
        }
        here_.sums.add_shortening(target, {parts, -unlimited, unlimited, usual_parts});
        here_.in_spare = 0;
    }

    void of_cascade(const BiquadCascade& cascade) {
        for (std::size_t j = 0; j < cascade.sections.size(); ++j) {
            const BiquadSection& s = cascade.sections[j];
            add_section(here_, {{s.b0, s.b1, s.b2}, {s.a1, s.a2}}, j, j + 1 == cascade.sections.size());
        }
    }

    StageSums here_;
};

}  // namespace

std::vector<RoundingPoint> rounding_points(const DescribedChain& chain, const ExactChain& exact) {
    std::vector<RoundingPoint> all;
    UsedBits used;
    for (std::size_t i = 0; i < chain.stages.size(); ++i) {
        const bool is_float = chain.stages[i].number == NumberKind::float32;
        if (is_float) used.spare = 0;
        StagePoints stage(chain, exact, i, used);
        if (!is_float) {
            for (RoundingPoint& point : stage.find()) all.push_back(std::move(point));
        }
        if (!is_float) used = stage.used_out();
    }
    return all;
}

FilterChain path_of(const RoundingPoint& point, const FilterChain& chain) {
    FilterChain path = point.inside;
    if (point.saves_fraction) path.push_back({Fir{{1.0, -1.0}}, std::nullopt});
    const FilterChain rest = point.place == RoundingPoint::Place::entry ? path_from_section(chain, point.node)
                                                                        : path_to_output(chain, point.node);
    path.insert(path.end(), rest.begin(), rest.end());
    return path;
}

}  // namespace halflsb

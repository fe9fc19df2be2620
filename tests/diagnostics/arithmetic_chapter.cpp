// What the arithmetic of a filter can be refused for, and what a rule needs of it.
#include <string>
#include <vector>

#include "oracle/arithmetic/described.hpp"
#include "oracle/filters/filter.hpp"
#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

struct Body {
    std::string_view done;
    std::string filter;  ///< the words of the stage
    std::string arithmetic;
    std::string format = "q15";
};

const std::string fir = "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n";
const std::string average = "kind = \"moving-average\"\npoints = 5\n";
const std::string sections = "kind = \"biquad-cascade\"\nsections = [[0.5, 0, 0, -0.5, 0.25]]\n";
const std::string one_pole = "kind = \"one-pole\"\ncoefficient = 0.03\n";
const std::string cic = "kind = \"cic-decimator\"\norder = 4\nfactor = 25\n";
const std::string median = "kind = \"median\"\npoints = 5\n";

const std::vector<Body> misplaced = {
    {"a structure of another kind", fir, "structure = \"transposed-2\"\n"},
    {"a structure of sections for an average", average, "structure = \"direct-2\"\n"},
    {"a structure of a median", median, "structure = \"direct-1\"\n"},
    {"a division of sections", sections, "division = \"shift\"\n"},
    {"the order of a running sum", average, "summation = \"oldest-first\"\n"},
    {"bits of a coefficient that an average has not", average, "coefficient_bits = 16\n"},
    {"bits of a coefficient that is a shift", "kind = \"one-pole\"\nshift_bits = 4\n", "coefficient_bits = 16\n"},
    {"an accumulator of floats", fir, "number = \"float32\"\naccumulator_bits = 32\n"},
    {"fused integers", fir, "multiply_add = \"fused\"\n"},
    {"bits that taps discard", fir, "discarded_bits = [1, 2]\n"},
    {"bits that an interpolator discards", "kind = \"cic-interpolator\"\norder = 1\nfactor = 4\n",
     "discarded_bits = [1, 2]\n"},
    {"bits that floats discard", "kind = \"cic-decimator\"\norder = 1\nfactor = 4\n",
     "number = \"float32\"\ndiscarded_bits = [1, 2]\n"},
    {"a sum that is shortened at the output alone, of taps", fir, "rounding_at = \"output\"\n"},
    {"a sum that is shortened at the output alone, in direct-2", sections,
     "structure = \"direct-2\"\nrounding_at = \"output\"\n"},
};

const std::vector<Body> contradictory = {
    {"integers from words of floats", fir, "number = \"integer\"\n", "f32"},
    {"words of floats between stages of integers", fir, "number = \"integer\"\nstage_format = \"f32\"\n"},
    {"a shift by 5", average, "division = \"shift\"\n"},
    {"a reciprocal without its bits", average, "division = \"reciprocal\"\n"},
    {"a reciprocal that is stored as 0", "kind = \"moving-average\"\npoints = 100\n",
     "division = \"reciprocal\"\ncoefficient_fraction_bits = 4\n"},
    {"a reciprocal that does not fit", average,
     "division = \"reciprocal\"\ncoefficient_fraction_bits = 15\ncoefficient_bits = 8\n"},
    {"a tap that does not fit", "kind = \"fir\"\ntaps = [0.25, 1.5]\n",
     "coefficient_bits = 16\ncoefficient_fraction_bits = 15\n"},
    {"a tap that fits no 16 bits", "kind = \"fir\"\ntaps = [40000.0]\n",
     "coefficient_bits = 16\ncoefficient_fraction_bits = 4\n"},
    {"a tap that fits 64 bits with fewer fraction bits alone", "kind = \"fir\"\ntaps = [1e9]\n",
     "coefficient_bits = 16\ncoefficient_fraction_bits = 62\n"},
    {"a tap that fits no 64 bits", "kind = \"fir\"\ntaps = [1e9]\n", "coefficient_fraction_bits = 62\n"},
    {"feedback that does not fit, subtracted",
     "kind = \"biquad-cascade\"\nsections = [[0.5, 0, 0, -1.5, 0.75], [0.5, 0, 0, -1.9, 0.95]]\n",
     "coefficient_bits = 16\ncoefficient_fraction_bits = 15\nfeedback_coefficients = \"subtracted\"\n"},
    {"feedback that does not fit, added", "kind = \"iir\"\nb = [0.5]\na = [1.0, -1.5, 0.75]\n",
     "coefficient_bits = 16\ncoefficient_fraction_bits = 15\n"},
    {"the rest of a one-pole, which does not fit", one_pole,
     "structure = \"direct-1\"\ncoefficient_bits = 8\ncoefficient_fraction_bits = 12\n"},
    {"the rest of a one-pole, which fits with no bit of its coefficient", "kind = \"one-pole\"\ncoefficient = 0.002\n",
     "structure = \"direct-1\"\ncoefficient_bits = 8\ncoefficient_fraction_bits = 15\n"},
    {"an accumulator that holds no product", fir, "coefficient_fraction_bits = 15\naccumulator_bits = 16\n"},
    {"an accumulator that holds no sample", average, "accumulator_bits = 12\n"},
    {"an accumulator that would need more than 64 bits", fir, "coefficient_fraction_bits = 40\naccumulator_bits = 64\n",
     "q31"},
    {"an accumulator of too many fraction bits", "kind = \"fir\"\ntaps = [32.0]\n",
     "coefficient_fraction_bits = 30\naccumulator_bits = 64\naccumulator_fraction_bits = 62\n", "q31"},
    {"an accumulator for a state of too many fraction bits", sections,
     "coefficient_fraction_bits = 14\naccumulator_bits = 64\nstate_bits = 64\nstate_fraction_bits = 62\n"},
    {"an accumulator for a state and coefficients of too many fraction bits",
     "kind = \"biquad-cascade\"\nsections = [[4096, 0, 0, -0.5, 0.25]]\n",
     "coefficient_fraction_bits = 50\naccumulator_bits = 64\nstate_bits = 64\nstate_fraction_bits = 62\n"},
    {"registers that are too narrow", cic, "state_bits = 24\n"},
    {"an accumulator of a CIC", cic, "accumulator_bits = 24\n"},
    {"discards of seven registers", cic, "discarded_bits = [1, 6, 9, 13, 14, 15, 16]\n"},
    {"one discard", cic, "discarded_bits = [4]\n"},
    {"the discards of the paper with that of the output", cic, "discarded_bits = [1, 6, 9, 13, 14, 15, 16, 17, 19]\n"},
    {"discards that count from one register to the next", cic, "discarded_bits = [1, 5, 3, 4, 1, 1, 1, 1]\n"},
    {"more discarded than there is", cic, "state_bits = 35\ndiscarded_bits = [1, 6, 9, 13, 14, 15, 16, 34]\n"},
    {"a fraction saved in transposed-2", sections,
     "structure = \"transposed-2\"\ncoefficient_fraction_bits = 14\nfraction_saving = \"on\"\n"},
    {"a fraction saved of rounded products", sections,
     "coefficient_fraction_bits = 14\nrounding_at = \"product\"\nfraction_saving = \"on\"\n"},
    {"a fraction saved of a difference", one_pole, "coefficient_fraction_bits = 15\nfraction_saving = \"on\"\n"},
    {"a section that float32 makes unstable",
     "kind = \"biquad-cascade\"\nsections = [[1, 0, 0, -1.99999999, 0.999999991]]\n", "", "f32"},
    {"a recursion that float32 makes unstable", "kind = \"iir\"\nb = [1]\na = [1, -0.99999999]\n", "", "f32"},
};

const std::vector<Body> not_exact = {
    {"exact, and the coefficients are not said", fir, "rounding = \"floor\"\n"},
    {"exact, and the rounding is not said", fir, "coefficient_fraction_bits = 15\n"},
    {"exact, and the words between stages are not said", fir,
     "coefficient_fraction_bits = 15\nrounding = \"floor\"\n[[filter]]\n" + median},
    {"exact, and a CIC in float32", "kind = \"cic-decimator\"\norder = 4\nfactor = 4\n", "", "f32"},
    {"exact, and no start from zeros",
     "kind = \"comb\"\ndelay_samples = 2\nforward = 0.5\ninitial = \"first-sample\"\n",
     "coefficient_fraction_bits = 15\nrounding = \"floor\"\n"},
    {"exact, a saved fraction and no start from zeros", fir + "initial = \"first-sample\"\n",
     "coefficient_fraction_bits = 15\nrounding = \"floor\"\nfraction_saving = \"on\"\n"},
    {"exact, and an average that grows by its reciprocal",
     "kind = \"moving-average\"\npoints = 16\ninitial = \"growing\"\n",
     "division = \"reciprocal\"\ncoefficient_fraction_bits = 15\nrounding = \"floor\"\n"},
    {"exact, and states too coarse to hold the first sample",
     "kind = \"one-pole\"\nshift_bits = 3\ninitial = \"first-sample\"\n",
     "rounding = \"floor\"\nstate_bits = 16\nstate_fraction_bits = 8\n"},
};

Parts plan_with(const Body& body) {
    Parts parts;
    parts.signal = "rate_hz = 1200.0\ninput = \"" + body.format + "\"\noutput = \"" + body.format + "\"\n";
    parts.filter = body.filter + "[filter.arithmetic]\n" + body.arithmetic;
    // Words between stages need a stage behind them.
    if (body.arithmetic.find("stage_format") != std::string::npos) parts.filter += "[[filter]]\n" + median;
    if (body.format == "f32") parts.rule = "kind = \"error\"\nmax_ratio = 0.001\n";
    return parts;
}

void show_rules(Page& page) {
    for (const Body& body : not_exact) {
        Parts parts = plan_with(body);
        parts.rule = "kind = \"exact\"\n";
        show_plan(page, body.done, parts.text());
    }
    Parts parts = plan_with({"", fir, "coefficient_fraction_bits = 15\nrounding = \"floor\"\n"});
    parts.signal = "rate_hz = 1200.0\ninput = \"q15\"\noutput = \"i16\"\noutput_per_input = 30000.0\n";
    parts.rule = "kind = \"exact\"\n";
    show_plan(page, "exact, and the scale is no power of two", parts.text());
    parts = plan_with({"", one_pole, "coefficient_fraction_bits = 15\nrounding = \"floor\"\n"});
    parts.rule = "kind = \"exact\"\n";
    parts.of_case = "start = \"flush\"\n";
    show_plan(page, "exact, and a flush that leaves remainders", parts.text());
    parts.of_case = "start = \"running\"\ndiscard_samples = 100\n";
    show_plan(page, "exact, and a case that starts running", parts.text());
    parts = plan_with(
        {"", "kind = \"one-pole\"\ncoefficient = 1e-6\n", "coefficient_fraction_bits = 31\nrounding = \"floor\"\n"});
    parts.rule = "kind = \"error\"\nmax_lsb = \"derived\"\n";
    show_plan(page, "a derived limit wider than full scale", parts.text());
    parts = plan_with({"", "kind = \"cic-decimator\"\norder = 4\nfactor = 4\n", "number = \"float32\"\n"});
    parts.rule = "kind = \"error\"\nmax_lsb = \"derived\"\n";
    show_plan(page, "a derived limit of a CIC in float32", parts.text());
    parts = plan_with({"", "kind = \"one-pole\"\ncoefficient = 1e-8\n", "number = \"float32\"\n"});
    parts.rule = "kind = \"error\"\nmax_lsb = \"derived\"\n";
    show_plan(page, "a derived limit that has no end", parts.text());
}

}  // namespace

void arithmetic_chapter(Page& page) {
    page.chapter("The arithmetic");
    for (const Body& body : misplaced) show_plan(page, body.done, plan_with(body).text());
    for (const Body& body : contradictory) show_plan(page, body.done, plan_with(body).text());
    page.chapter("What a rule needs of the arithmetic");
    show_rules(page);
}

}  // namespace halflsb::diagnostics

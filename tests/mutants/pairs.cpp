#include "tests/mutants/pairs.hpp"

namespace halflsb::mutants {
namespace {

std::vector<std::string> split(const std::string& text, const std::string& at) {
    std::vector<std::string> parts;
    std::size_t from = 0;
    for (std::size_t next = text.find(at); next != std::string::npos; next = text.find(at, from)) {
        parts.push_back(text.substr(from, next - from));
        from = next + at.size();
    }
    parts.push_back(text.substr(from));
    return parts;
}

class List {
public:
    void add(const char* id, Fault fault, const char* expected, std::vector<const char*> filters) {
        for (const char* filter : filters) all.push_back({id, filter, fault, expected});
    }
    std::vector<Mutant> all;
};

using Filters = std::vector<const char*>;

const Filters rounding_once = {"average",    "FIR symmetric", "FIR asymmetric",
                               "biquad 0.1", "biquad 0.02",   "biquad 0.004"};
const Filters taps = {"FIR symmetric", "FIR asymmetric"};
const Filters sections = {"biquad 0.1", "biquad 0.02", "biquad 0.004"};
const Filters products = {"FIR symmetric", "FIR asymmetric", "biquad 0.1", "biquad 0.02", "biquad 0.004"};
const Filters steady = {"average",     "FIR symmetric", "FIR asymmetric", "biquad 0.1",
                        "biquad 0.02", "biquad 0.004",  "one-pole"};
const Filters all_kinds = {"average",     "FIR symmetric", "FIR asymmetric", "biquad 0.1",
                           "biquad 0.02", "biquad 0.004",  "one-pole",       "CIC decimator"};
const Filters few = {"average", "FIR asymmetric", "biquad 0.02", "one-pole"};

void roundings(List& list) {
    list.add("A01", Fault::floor, "floor in place of half-up", rounding_once);
    list.add("A02", Fault::toward_zero, "toward-zero in place of half-up", rounding_once);
    list.add("A02", Fault::toward_zero, "toward-zero in place of floor", {"one-pole", "CIC decimator"});
    list.add("A03 away", Fault::half_away, "half-away in place of half-up", rounding_once);
    list.add("A03 even", Fault::half_even, "half-even in place of half-up", rounding_once);
    list.add("A04 floored", Fault::products_floored, "each product shortened by floor before it is added", products);
    list.add("A04 rounded", Fault::products_rounded, "each product shortened before it is added", products);
    list.add("A05", Fault::constant_twice, "the constant of the rounding twice as large", rounding_once);
    list.add("A05", Fault::constant_twice, "half-up in place of floor", {"one-pole", "CIC decimator"});
    list.add("A14", Fault::no_saving, "no fraction saved",
             {"biquad 0.02, fraction saved", "biquad 0.004, fraction saved"});
    list.add("A17", Fault::products_16, "each product shortened by floor before it is added", taps);
    list.add("A18", Fault::products_upper, "the upper 32 bits of each product", {"biquad 0.1, 32 bits"});
    list.add("A20", Fault::toward_zero, "toward-zero in place of floor", {"average, floor"});
    list.add("A24", Fault::saving, "the fraction saved", sections);
}

void overflows(List& list) {
    list.add("A07", Fault::output_wraps, "an output that wraps",
             {"average", "FIR symmetric", "FIR asymmetric", "resonant biquad 0.1", "high-pass 0.02"});
    list.add("A08", Fault::feedback_unheld, "feedback before the output's overflow",
             {"biquad 0.1", "biquad 0.02", "biquad 0.004", "resonant biquad 0.1", "high-pass 0.02"});
    list.add("A09", Fault::held_between, "stage 1: i16 words between this stage and the next", {"two sections"});
    list.add("A10", Fault::sum_32, "an accumulator of 32 bits", taps);
    list.add("A11", Fault::sum_32, "an accumulator of 32 bits",
             {"biquad 0.1", "biquad 0.02", "biquad 0.004", "resonant biquad 0.1"});
    list.add("A12", Fault::direct_2, "direct-2 in place of direct-1", sections);
    list.add("A12 wraps", Fault::direct_2_wraps, "direct-2 in place of direct-1 + an output that wraps", sections);
    list.add("A13", Fault::output_wraps, "an output that wraps", sections);
    list.add("A15", Fault::narrow_state,
             "a state in the output's words, to which the difference is added, shortened by floor", {"one-pole"});
    list.add("A15 divided", Fault::narrow_divided,
             "a state in the output's words, to which the difference is added, shortened by toward-zero", {"one-pole"});
    list.add("A22", Fault::sum_16, "an accumulator of 16 bits", {"average", "average, floor"});
    list.add("A22", Fault::sum_16, "a state of 16 bits", {"one-pole"});
    list.add("A22 unsigned", Fault::sum_u16, "an unsigned accumulator of 16 bits", {"average", "average, floor"});
}

void coefficients(List& list) {
    list.add("C01", Fault::coarse, "coefficients in steps of 2^-8", taps);
    list.add("C01", Fault::coarse, "coefficients in steps of 2^-6", {"biquad 0.1"});
    list.add("C01", Fault::coarse, "coefficients in steps of 2^-8", {"biquad 0.02"});
    list.add("C01", Fault::coarse, "coefficients in steps of 2^-12", {"biquad 0.004"});
    list.add("C02", Fault::q14, "coefficients in steps of 2^-14", {"biquad 0.001, 32 bits"});
    list.add("C03", Fault::cut, "coefficients cut off toward zero", products);
    list.add("C04", Fault::scale_less, "coefficients times 2^15 - 1, not times 2^15", taps);
    list.add("C04", Fault::scale_less, "coefficients times 2^14 - 1/2, not times 2^14", sections);
    list.add("C05 less", Fault::shift_less, "a shift of 14 bits in place of 15", taps);
    list.add("C05 less", Fault::shift_less, "a shift of 13 bits in place of 14", sections);
    list.add("C05 less", Fault::shift_less, "a shift of 8 bits", {"CIC decimator"});
    list.add("C05 more", Fault::shift_more, "a shift of 16 bits in place of 15", taps);
    list.add("C05 more", Fault::shift_more, "a shift of 15 bits in place of 14", sections);
    list.add("C05 more", Fault::shift_more, "a shift of 10 bits", {"CIC decimator"});
    list.add("C06", Fault::by_largest, "coefficients divided by the largest of them", sections);
    list.add("C07 a1", Fault::a1_sign, "a1 with the opposite sign", sections);
    list.add("C07 a2", Fault::a2_sign, "a2 with the opposite sign", sections);
    list.add("C09", Fault::tables_exchanged, "the table b0 b1 b2 a1 a2 read as a1 a2", sections);
    list.add("C10", Fault::reversed, "the taps in the opposite order of time", taps);
    list.add("C12", Fault::zero_first, "a zero before the first tap: one sample late", taps);
    list.add("C13", Fault::taps_floored, "coefficients cut off downward", taps);
    list.add("C14", Fault::b1_one_more, "b1 one step larger", {"high-pass 0.02", "biquad 0.004"});
    list.add("C15 twice", Fault::b0_over_a0, "b0 divided by a0 once more", sections);
    list.add("C15 never", Fault::b_times_a0, "b not divided by a0", sections);
    list.add("C16", Fault::twice_the_cutoff, "designed for twice the frequency",
             {"biquad 0.1", "biquad 0.02", "biquad 0.004", "high-pass 0.02"});
    list.add("C18", Fault::cleared_on_update, "at sample 300: the state is that of a reset", steady);
    list.add("C19", Fault::bypass, "the input goes past the filter", sections);
}

void structures(List& list) {
    list.add("S01", Fault::one_late, "each output 1 sample late", all_kinds);
    const Filters averages = {"average", "average, floor"};
    list.add("S02 15/16", Fault::window_15_by_16, "a window of 15 points, divided by 16", averages);
    list.add("S02 15/15", Fault::window_15_by_15, "a window of 15 points", averages);
    list.add("S02 17/16", Fault::window_17_by_16, "a window of 17 points, divided by 16", averages);
    list.add("S02 17/17", Fault::window_17_by_17, "a window of 17 points", averages);
    list.add("S03 start", Fault::ring_from_1, "the ring begins again at 1",
             {"average", "FIR symmetric", "FIR asymmetric"});
    list.add("S03 end", Fault::ring_read_short, "the ring read past its last place", taps);
    list.add("S05", Fault::sum_kept, "a reset clears all but the last word of the state", averages);
    list.add("S06", Fault::half_reset, "a reset clears only the first 9 places of the ring", {"average"});
    list.add("S06", Fault::half_reset, "a reset clears only the first half of the ring and begins it anew", taps);
    list.add("S06", Fault::half_reset, "a reset clears only the past inputs of each section", sections);
    list.add("S06", Fault::half_reset, "a reset clears the integrators, the combs stay", {"CIC decimator"});
    list.add("S07", Fault::no_reset, "a reset leaves the state as it was", all_kinds);
    list.add("S08", Fault::garbage_at_power_up, "bytes of 0x5a in the state at power-up", steady);
    list.add("S09", Fault::first_sample, "a start as if the first sample had always been there", steady);
    list.add("S09 growing", Fault::growing, "a start with the mean of the samples so far", averages);
    list.add("S10 x", Fault::x_order, "x[n-1] written before x[n-2] was kept", sections);
    list.add("S10 y", Fault::y_order, "y[n-1] written before y[n-2] was kept", sections);
    list.add("S11", Fault::state_exchanged, "each 64 samples from 64 on: the last two words of the state change places",
             sections);
    list.add("S15", Fault::one_filter, "all channels pass one filter and share its state", {"two channels"});
    list.add("S16 coupled", Fault::coupled, "1/128 of the input of channel", {"two channels"});
    list.add("S16 slip", Fault::slipped, "its filter gets the samples of channel", {"two channels"});
    list.add("S17", Fault::last_phase, "the sample kept of each 8 is number 1, not 8", {"CIC decimator"});
    list.add("S18 second", Fault::each_second, "the filter is called with each 2nd sample", all_kinds);
    list.add("S18 twice", Fault::called_twice, "the filter is called 2 times with each sample", steady);
    list.add("S20", Fault::bypass, "the input goes past the filter",
             {"average", "FIR symmetric", "FIR asymmetric", "one-pole"});
}

void floats(List& list) {
    list.add("F01", Fault::running_sum, "running-sum in place of fresh-sum", {"average, float32"});
    list.add("F03", Fault::never_cleared, "a mean of all samples since the reset", {"average, float32"});
    list.add("F04", Fault::double_literal, "computed in double precision", {"one-pole, float32"});
    list.add("F04", Fault::double_literal, "computed in double precision", {"one-pole, float32 inside"});
    list.add("F10", Fault::cast, "toward-zero in place of half-even, into an output that wraps",
             {"one-pole, float32 inside"});
    list.add("F11", Fault::none, "", {"biquad 0.001, float32"});
}

void representations(List& list) {
    list.add("N01", Fault::offset_kept, "at the input: the top bit inverted", all_kinds);
    list.add("N01 wide", Fault::offset_kept_wide, "at the input: half the range added to each number", all_kinds);
    list.add("N02", Fault::read_unsigned, "at the input: negative numbers taken as unsigned ones", all_kinds);
    list.add("N03", Fault::read_unsigned, "at the input: negative numbers taken as unsigned ones",
             {"biquad 0.02, 24 bits"});
    list.add("N04", Fault::bytes_swapped, "at the input: the bytes of each word in the opposite order", all_kinds);
    list.add("N06", Fault::negated, "at the input: the opposite sign in two's complement", all_kinds);
    list.add("N08", Fault::no_data, "each 500 samples from 499 on: the lowest code comes in place of a sample", steady);
    list.add("N09", Fault::unsigned_inside, "an unsigned difference", {"one-pole"});
}

void acquisition(List& list) {
    list.add("D01", Fault::half_repeated, "at sample 576: a block in front of the filter", few);
    list.add("D02", Fault::torn_block, "each 64 samples from 108 on: a block in front of the filter", few);
    list.add("D03 before", Fault::sample_lost, "each 1000 samples from 999 on: a sample is lost in front of the filter",
             few);
    list.add("D03 behind", Fault::output_lost, "each 1000 samples from 999 on: an output is lost behind the filter",
             few);
    list.add("D04 before", Fault::sample_doubled, "each 1000 samples from 999 on: a sample reaches the filter twice",
             few);
    list.add("D04 behind", Fault::output_doubled, "each 1000 samples from 999 on: an output is sent twice", few);
    list.add("D06", Fault::stale_line, "each 1024 samples from 512 on: a block in front of the filter", few);
    list.add("D07", Fault::rotated, "from sample 1280 on its filter gets the samples of channel", {"two channels"});
    list.add("D12", Fault::block_skipped, "at sample 768: a block does not reach the filter", few);
    list.add("D14", Fault::slot_again, "at sample 1280: a block behind the filter", few);
}

}  // namespace

std::vector<Mutant> every_mutant() {
    List list;
    roundings(list);
    overflows(list);
    coefficients(list);
    structures(list);
    floats(list);
    representations(list);
    acquisition(list);
    return list.all;
}

bool is_expected(const std::string& expected, const std::string& said) {
    const std::vector<std::string> changes = split(said, "; ");
    for (const std::string& alternative : split(expected, " | ")) {
        const std::vector<std::string> words = split(alternative, " + ");
        if (alternative.empty() || words.size() != changes.size()) continue;
        bool is_it = true;
        for (const std::string& each : words) is_it = is_it && said.find(each) != std::string::npos;
        if (is_it) return true;
    }
    return false;
}

}  // namespace halflsb::mutants

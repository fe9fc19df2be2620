#include "tests/mutants/filters.hpp"

#include <cmath>
#include <cstdio>
#include <cstdlib>

#include "tests/mutants/float_cores.hpp"
#include "tests/mutants/tap_core.hpp"

namespace halflsb::mutants {
namespace {

constexpr double pi = 3.14159265358979323846;

/// As a plan writes it, and as the firmware's table has it: the same decimals.
std::string text_of(double number) {
    char text[40];
    std::snprintf(text, sizeof text, "%.9f", number);
    return text;
}

std::vector<double> as_written(std::vector<double> numbers) {
    for (double& number : numbers) number = std::strtod(text_of(number).c_str(), nullptr);
    return numbers;
}

Section written(const Section& section) {
    const auto numbers = as_written({section.begin(), section.end()});
    return {numbers[0], numbers[1], numbers[2], numbers[3], numbers[4]};
}

std::string list_of(const std::vector<double>& numbers) {
    std::string text;
    for (const double number : numbers) text += (text.empty() ? "" : ", ") + text_of(number);
    return "[" + text + "]";
}

/// 32 taps of a low-pass at 0.1 of the rate under a raised cosine, sum 1.
std::vector<double> symmetric_taps() {
    std::vector<double> taps;
    double sum = 0.0;
    for (int n = 0; n < 32; ++n) {
        const double t = n - 15.5, window = 0.5 + 0.5 * std::cos(pi * t / 16.5);
        taps.push_back(window * std::sin(2.0 * pi * 0.1 * t) / (pi * t));
        sum += taps.back();
    }
    for (double& tap : taps) tap /= sum;
    return as_written(taps);
}

/// 32 taps that ring down, sum 1: the sum of their sizes is above 2.
std::vector<double> asymmetric_taps() {
    std::vector<double> taps;
    double sum = 0.0;
    for (int n = 0; n < 32; ++n) {
        taps.push_back(std::exp(-n / 9.0) * std::sin(2.0 * pi * 0.14 * (n + 0.7)));
        sum += taps.back();
    }
    for (double& tap : taps) tap /= sum;
    return as_written(taps);
}

std::string signal(const std::string& format, int channels = 1) {
    return "title = \"mutants\"\n[signal]\nrate_hz = 1200.0\ninput = \"" + format + "\"\noutput = \"" + format +
           "\"\n" + (channels > 1 ? "channels = " + std::to_string(channels) + "\n" : "");
}

std::string average_words(const std::string& rounding) {
    return "[[filter]]\nkind = \"moving-average\"\npoints = 16\n[filter.arithmetic]\naccumulator_bits = 32\n"
           "division = \"shift\"\nrounding = \"" +
           rounding + "\"\noutput_overflow = \"saturate\"\n";
}

std::string taps_words(const std::vector<double>& taps) {
    return "[[filter]]\nkind = \"fir\"\ntaps = " + list_of(taps) +
           "\n[filter.arithmetic]\ncoefficient_bits = 16\ncoefficient_fraction_bits = 15\naccumulator_bits = 64\n"
           "rounding = \"half-up\"\noutput_overflow = \"saturate\"\n";
}

std::string section_words(const Section& s, const std::string& arithmetic) {
    const std::vector<double> numbers(s.begin(), s.end());
    return "[[filter]]\nkind = \"biquad-cascade\"\nsections = [" + list_of(numbers) + "]\n[filter.arithmetic]\n" +
           arithmetic;
}

std::string usual_sections(int bits = 14, const std::string& rest = "rounding = \"half-up\"\n") {
    return "structure = \"direct-1\"\ncoefficient_fraction_bits = " + std::to_string(bits) +
           "\naccumulator_bits = 64\noutput_overflow = \"saturate\"\n" + rest;
}

template <class Make>
FilterUnderTest one_channel(std::string name, std::string plan, int word_bits, Make make) {
    return {std::move(name), std::move(plan), [word_bits, make](Fault fault) {
                std::vector<std::unique_ptr<Core>> cores;
                cores.push_back(make(fault));
                return std::make_unique<Board>(std::move(cores), word_bits, fault);
            }};
}

FilterUnderTest low_pass(const std::string& name, double cutoff, SectionSetup setup, const std::string& format,
                         const std::string& arithmetic, double q = 0.70710678118654752, bool is_high = false) {
    const auto design = [=](Fault fault) { return written(second_order(cutoff, q, is_high, fault)); };
    return one_channel(name, signal(format) + section_words(design(Fault::none), arithmetic), setup.word_bits,
                       [=](Fault fault) { return std::make_unique<Biquad>(design(fault), setup, fault); });
}

void add_sections(std::vector<FilterUnderTest>& all) {
    all.push_back(low_pass("biquad 0.1", 0.1, {16, 14, 6}, "q15", usual_sections()));
    all.push_back(low_pass("biquad 0.02", 0.02, {16, 14, 8}, "q15", usual_sections()));
    all.push_back(low_pass("biquad 0.004", 0.004, {16, 14, 12}, "q15", usual_sections()));
    all.push_back(low_pass("biquad 0.02, fraction saved", 0.02, {16, 14, 8, false, true}, "q15",
                           usual_sections(14, "rounding = \"floor\"\nfraction_saving = \"on\"\n")));
    all.push_back(low_pass("biquad 0.004, fraction saved", 0.004, {16, 14, 8, false, true}, "q15",
                           usual_sections(14, "rounding = \"floor\"\nfraction_saving = \"on\"\n")));
    all.push_back(low_pass("resonant biquad 0.1", 0.1, {16, 14, 8}, "q15", usual_sections(), 6.0));
    all.push_back(low_pass("high-pass 0.02", 0.02, {16, 14, 8}, "q15", usual_sections(), 0.70710678118654752, true));
    const std::string wide =
        "structure = \"direct-1\"\ncoefficient_fraction_bits = 30\noutput_overflow = \"saturate\"\n"
        "rounding = \"half-up\"\n";
    all.push_back(low_pass("biquad 0.001, 32 bits", 0.001, {32, 30, 8}, "q31", wide));
    all.push_back(low_pass("biquad 0.02, 24 bits", 0.02, {24, 14, 8}, "i24", usual_sections()));
    all.push_back(low_pass("biquad 0.1, 32 bits", 0.1, {32, 30, 8}, "q31", wide));
    const Section first = second_order(0.1, 4.0, false, Fault::none),
                  second = second_order(0.02, 0.7, false, Fault::none);
    all.push_back(
        one_channel("two sections",
                    signal("i16") + section_words(first, usual_sections()) + "stage_format = \"i32\"\n" +
                        section_words(second, usual_sections()),
                    16, [=](Fault fault) { return std::make_unique<Pair>(written(first), written(second), fault); }));
}

std::vector<FilterUnderTest> make_filters() {
    std::vector<FilterUnderTest> all;
    all.push_back(one_channel("average", signal("q15") + average_words("half-up"), 16,
                              [](Fault fault) { return std::make_unique<Average>(fault, true); }));
    all.push_back(one_channel("average, floor", signal("q15") + average_words("floor"), 16,
                              [](Fault fault) { return std::make_unique<Average>(fault, false); }));
    all.push_back(one_channel("FIR symmetric", signal("q15") + taps_words(symmetric_taps()), 16,
                              [](Fault fault) { return std::make_unique<Taps>(symmetric_taps(), fault); }));
    all.push_back(one_channel("FIR asymmetric", signal("q15") + taps_words(asymmetric_taps()), 16,
                              [](Fault fault) { return std::make_unique<Taps>(asymmetric_taps(), fault); }));
    add_sections(all);
    all.push_back(one_channel(
        "one-pole",
        signal("q15") + "[[filter]]\nkind = \"one-pole\"\nshift_bits = 4\n[filter.arithmetic]\nstructure = \"leak\"\n"
                        "state_bits = 32\nstate_fraction_bits = 19\nstate_overflow = \"wrap\"\nrounding = \"floor\"\n"
                        "output_overflow = \"saturate\"\n",
        16, [](Fault fault) { return std::make_unique<OnePole>(fault); }));
    all.push_back(one_channel("CIC decimator",
                              signal("q15") + "[[filter]]\nkind = \"cic-decimator\"\norder = 3\nfactor = 8\n"
                                              "shift_bits = 9\nphase_samples = 7\n[filter.arithmetic]\n"
                                              "state_bits = 32\nrounding = \"floor\"\noutput_overflow = \"saturate\"\n",
                              16, [](Fault fault) { return std::make_unique<Cic>(fault); }));
    all.push_back({"two channels", signal("q15", 2) + average_words("half-up"), [](Fault fault) {
                       std::vector<std::unique_ptr<Core>> cores;
                       for (int c = 0; c < 2; ++c) cores.push_back(std::make_unique<Average>(fault, true));
                       return std::make_unique<Board>(std::move(cores), 16, fault);
                   }});
    all.push_back(one_channel("average, float32",
                              signal("f32") +
                                  "[[filter]]\nkind = \"moving-average\"\npoints = 16\n[filter.arithmetic]\n"
                                  "number = \"float32\"\nstructure = \"fresh-sum\"\ndivision = \"divide\"\n",
                              32, [](Fault fault) { return std::make_unique<FloatAverage>(fault); }));
    const auto float_pole = [](const std::string& format, const std::string& rest) {
        return signal(format) +
               "[[filter]]\nkind = \"one-pole\"\ncoefficient = 0.1\n[filter.arithmetic]\n"
               "number = \"float32\"\nstructure = \"difference\"\n" +
               rest;
    };
    all.push_back(one_channel("one-pole, float32", float_pole("f32", ""), 32,
                              [](Fault fault) { return std::make_unique<FloatOnePole>(fault, false); }));
    all.push_back(one_channel("one-pole, float32 inside",
                              float_pole("q15", "rounding = \"half-even\"\noutput_overflow = \"saturate\"\n"), 16,
                              [](Fault fault) { return std::make_unique<FloatOnePole>(fault, true); }));
    const Section slow = second_order(0.001, 0.70710678118654752, false, Fault::none);
    all.push_back(one_channel("biquad 0.001, float32",
                              signal("f32") + section_words(slow,
                                                            "number = \"float32\"\nstructure = \"direct-1\"\n"
                                                            "multiply_add = \"separate\"\n"),
                              32, [slow](Fault fault) { return std::make_unique<FloatBiquad>(written(slow), fault); }));
    return all;
}

}  // namespace

const std::vector<FilterUnderTest>& filters() {
    static const std::vector<FilterUnderTest> all = make_filters();
    return all;
}

const FilterUnderTest& filter_named(const std::string& name) {
    for (const FilterUnderTest& each : filters())
        if (each.name == name) return each;
    std::fprintf(stderr, "no filter is named %s\n", name.c_str());
    std::abort();
}

}  // namespace halflsb::mutants

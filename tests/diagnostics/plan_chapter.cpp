// What a plan can be refused for: one change of a good plan each.
#include <string>
#include <vector>

#include "runner/config/plan_file.hpp"
#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

const std::string good_plan = R"(title = "CW-7 load cell"

[signal]
rate_hz = 1200.0
input = "q15"
output = "q15"
unit = "g"
full_scale_unit = 6000.0

[[filter]]
kind = "fir"
taps = [0.25, 0.5, 0.25]

[[rule]]
kind = "error"
max_lsb = 1.5

[[case]]
name = "belt noise"
[case.stimulus]
shape = "noise"
length_samples = 4096
seed = 7
[[case.rule]]
kind = "response"
bands = [{ from_hz = 10.0, to_hz = 100.0, min_db = -3, max_db = 1 }]

[[case]]
name = "tare step"
[case.stimulus]
shape = "step"
length_samples = 256
)";

const std::vector<Change>& changes() {
    static const std::vector<Change> all = {
        // Words.
        {"an unknown key", "max_lsb", "max_lbs"},
        {"a key that nothing resembles", "unit = \"g\"", "colour = \"g\""},
        {"a key under the wrong header", "unit = \"g\"", "unit = \"g\"\ntitle = \"late\""},
        {"a key of the case under its stimulus", "shape = \"step\"", "shape = \"step\"\nlabels = [\"quick\"]"},
        {"a list written as one table", "[[filter]]", "[filter]"},
        {"one table written as a list", "[signal]", "[[signal]]"},
        {"a missing key", "rate_hz = 1200.0\n", ""},
        {"a missing kind", "kind = \"fir\"\n", ""},
        {"a word that is no choice", "shape = \"step\"", "shape = \"stop\""},
        {"a word far from every choice", "kind = \"fir\"", "kind = \"wavelet\""},
        // Types and ranges.
        {"a string for a number", "rate_hz = 1200.0", "rate_hz = \"1200\""},
        {"a number for a string", "title = \"CW-7 load cell\"", "title = 7"},
        {"a fraction for a whole number", "length_samples = 256", "length_samples = 256.5"},
        {"one number for a list", "taps = [0.25, 0.5, 0.25]", "taps = 0.25"},
        {"an empty list", "taps = [0.25, 0.5, 0.25]", "taps = []"},
        {"a text in a list of numbers", "taps = [0.25, 0.5, 0.25]", "taps = [0.25, \"0.5\"]"},
        {"not a number", "max_lsb = 1.5", "max_lsb = nan"},
        {"below its range", "max_lsb = 1.5", "max_lsb = -0.5"},
        {"above its range", "rate_hz = 1200.0", "rate_hz = 1.1e9"},
        {"an empty name", "name = \"tare step\"", "name = \"\""},
        {"a name of two lines", "name = \"tare step\"", "name = \"tare\\nstep\""},
        {"a name that is too long", "name = \"tare step\"",
         "name = \"a very long name, which nobody would like to type and which no report could show in one line of its "
         "table\""},
        {"two cases of one name", "name = \"tare step\"", "name = \"belt noise\""},
        // Filters.
        {"an unstable section", "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]",
         "kind = \"biquad-cascade\"\nsections = [[1, 0, 0, -2.1, 1.05]]"},
        {"taps twice", "taps = [0.25, 0.5, 0.25]", "taps = [0.25, 0.5, 0.25]\ntaps_file = \"taps.txt\""},
        {"a taps file outside the root", "taps = [0.25, 0.5, 0.25]", "taps_file = \"../taps.txt\""},
        {"a taps file that is not there", "taps = [0.25, 0.5, 0.25]", "taps_file = \"taps.txt\""},
        // Rules.
        {"a rule without a limit", "max_lsb = 1.5\n", ""},
        {"a limit wider than full scale", "max_lsb = 1.5", "max_lsb = 40000"},
        {"a limit given twice", "max_lsb = 1.5", "max_lsb = 1.5\nmax_ratio = 0.1"},
        {"bands that run backwards", "from_hz = 10.0, to_hz = 100.0", "from_hz = 100.0, to_hz = 10.0"},
        {"limits of a band that cross", "min_db = -3, max_db = 1", "min_db = 3, max_db = 1"},
        {"a band without a limit", ", min_db = -3, max_db = 1", ""},
        {"a band above Nyquist", "to_hz = 100.0", "to_hz = 700.0"},
        {"a response rule that a step cannot answer", "length_samples = 256\n",
         "length_samples = 256\n[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 1, to_hz = 9, max_db = 1 "
         "}]\n"},
        // Signal.
        {"input and output of two kinds", "output = \"q15\"", "output = \"i16\""},
        {"a gain between formats of one kind", "output = \"q15\"", "output = \"q15\"\noutput_per_input = 2.0"},
        {"a full scale of 0", "full_scale_unit = 6000.0", "full_scale_unit = 0.0"},
        {"a format without room to the left", "input = \"q15\"", "input = \"q15\"\ninput_justification = \"left\""},
        {"a format that cannot be packed", "input = \"q15\"", "input = \"u12\"\ninput_justification = \"packed\""},
        // Cases.
        {"labels that are one string", "name = \"tare step\"", "name = \"tare step\"\nlabels = \"quick\""},
        {"no label", "name = \"tare step\"", "name = \"tare step\"\nlabels = []"},
        {"a label that is a number", "name = \"tare step\"", "name = \"tare step\"\nlabels = [3]"},
        {"a label of two words", "name = \"tare step\"", "name = \"tare step\"\nlabels = [\"very quick\"]"},
        {"a label twice", "name = \"tare step\"", "name = \"tare step\"\nlabels = [\"quick\", \"quick\"]"},
        {"no setting", "name = \"tare step\"", "name = \"tare step\"\nsettings = {}"},
        {"a setting that no board has", "name = \"tare step\"", "name = \"tare step\"\nsettings = { \"\" = 3 }"},
        {"a setting that is a fraction", "name = \"tare step\"", "name = \"tare step\"\nsettings = { gain = 0.5 }"},
        {"a setting of 33 bits", "name = \"tare step\"", "name = \"tare step\"\nsettings = { gain = 4294967296 }"},
        {"samples discarded after a reset", "name = \"tare step\"", "name = \"tare step\"\ndiscard_samples = 8"},
        {"running, and nothing discarded", "name = \"tare step\"", "name = \"tare step\"\nstart = \"running\""},
        {"everything discarded", "name = \"tare step\"",
         "name = \"tare step\"\nstart = \"running\"\ndiscard_samples = 256"},
        {"a flush of an unknown filter", "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n", "kind = \"unknown\"\n"},
        {"a flush that never ends", "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n",
         "kind = \"one-pole\"\ncoefficient = 1e-9\n"},
        {"a rate at which the filter has no design", "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n",
         "kind = \"one-pole\"\ncorner_hz = 100.0\n"},
        {"a stimulus after a rule of its case", "[case.stimulus]\nshape = \"noise\"\nlength_samples = 4096\nseed = 7\n",
         "[[case.rule]]\nkind = \"latency\"\nlatency_samples = 0\n[case.stimulus]\nshape = \"noise\"\n"
         "length_samples = 4096\n"},
        {"the arithmetic of an unknown filter", "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]",
         "kind = \"unknown\"\n[filter.arithmetic]\nrounding = \"floor\""},
        {"words between stages of another kind of value", "taps = [0.25, 0.5, 0.25]",
         "taps = [0.25, 0.5, 0.25]\n[filter.arithmetic]\nstage_format = \"i32\""},
        {"a date", "full_scale_unit = 6000.0", "full_scale_unit = 2026-12-01"},
    };
    return all;
}

void show_without_cases(Page& page) {
    const std::string plan = good_plan.substr(0, good_plan.find("[[case]]"));
    const std::string filter = "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n";
    show_plan(page, "no case of an unknown filter",
              spoilt(plan.substr(0, plan.find("[[rule]]")), filter, "kind = \"unknown\"\n"));
    show_plan(page, "no case, and a rule that none of the standard set can answer",
              spoilt(plan, filter, "kind = \"median\"\npoints = 5\n") +
                  "[[rule]]\nkind = \"response\"\nbands = [{ from_hz = 10, to_hz = 20, max_db = 1 }]\n");
    show_plan(page, "no case, and no limit for the filter",
              spoilt(spoilt(plan.substr(0, plan.find("[[rule]]")), "input = \"q15\"", "input = \"i16\""),
                     "output = \"q15\"", "output = \"q15\"\noutput_per_input = 3e-5"));
}

}  // namespace

void plan_chapter(Page& page) {
    page.chapter("The plan");
    FakeFiles none;
    page.show("no plan there", std::get<ReadProblems>(read_plan("plan.toml", none)).texts.front());
    FakeFiles large;
    large.contents["plan.toml"] = std::string((1 << 20) + 1, '#');
    page.show("a plan of more than 1 MiB", std::get<ReadProblems>(read_plan("plan.toml", large)).texts.front());
    show_plan(page, "an empty file", "");
    show_plan(page, "a file of comments", "# nothing\n");
    show_plan(page, "title alone", "title = \"CW-7\"\n");
    show_without_cases(page);
    show_plan(page, "no rule",
              spoilt(good_plan.substr(0, good_plan.find("[[case.rule]]")),
                     "[[rule]]\nkind = \"error\"\nmax_lsb = 1.5\n", ""));
    for (const Change& change : changes()) {
        std::string text = spoilt(good_plan, change.from, change.to);
        if (change.done.find("flush") != std::string_view::npos)
            text = spoilt(text, "name = \"tare step\"", "name = \"tare step\"\nstart = \"flush\"");
        if (change.done.find("no design") != std::string_view::npos)
            text = spoilt(text, "name = \"tare step\"", "name = \"tare step\"\nrate_hz = 150.0");
        FakeFiles files;
        if (change.done == "taps twice") files.contents["./taps.txt"] = "1\n";
        show_plan(page, change.done, text, files);
    }
    std::string long_chain = good_plan;
    for (int i = 0; i < 32; ++i) long_chain += "[[filter]]\nkind = \"moving-average\"\npoints = 2\n";
    show_plan(page, "a chain of 33 stages", long_chain);
    show_plan(
        page, "words between stages of fractions, for a signal of codes",
        spoilt(spoilt(spoilt(good_plan, "input = \"q15\"", "input = \"i16\""), "output = \"q15\"", "output = \"i16\""),
               "taps = [0.25, 0.5, 0.25]", "taps = [0.25, 0.5, 0.25]\n[filter.arithmetic]\nstage_format = \"q31\""));
    FakeFiles files;
    files.contents["plan.toml"] = good_plan;
    page.show("--root that is not there",
              std::get<ReadProblems>(read_plan("plan.toml", files, {"nowhere", {}, {}})).texts.front());
    page.show("--seed that is too large",
              std::get<ReadProblems>(read_plan("plan.toml", files, {"", std::uint64_t{1} << 60, {}})).texts.front());
}

}  // namespace halflsb::diagnostics

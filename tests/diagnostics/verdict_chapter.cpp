// Why a rule failed or is undecided, as the report says it, and what stands at the end of a run.
#include <algorithm>
#include <bit>
#include <cmath>
#include <limits>
#include <string>
#include <utility>
#include <vector>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/judge/admission.hpp"
#include "oracle/judge/case_judge.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "runner/config/plan_file.hpp"
#include "runner/report/rule_report.hpp"
#include "runner/report/terminal_report.hpp"
#include "tests/diagnostics/plan_page.hpp"
#include "tests/diagnostics/right_board.hpp"
#include "tests/runner/report/sample_run.hpp"
#include "tests/support/accepted.hpp"

namespace halflsb::diagnostics {

namespace {

const TextStyle style{false, 110, false};

Parts small(const std::string& rules, const std::string& stimulus = "shape = \"noise\"\nlength_samples = 1000\n") {
    Parts parts;
    parts.rule = "kind = \"error\"\nmax_lsb = 0.5\n";
    parts.stimulus = stimulus;
    parts.after = rules;
    return parts;
}

Plan plan_of(Page& page, std::string_view done, const Parts& parts) {
    FakeFiles files;
    files.contents["plan.toml"] = parts.text();
    auto read = read_plan("plan.toml", files);
    if (const auto* problems = std::get_if<ReadProblems>(&read)) {
        page.show(done, problems->texts.front());
        page.missing(done);
        return {};
    }
    return std::get<Plan>(std::move(read));
}

/// The blocks of the rules that did not pass, as the report has them; of those that passed their reason.
std::string judged(const Plan& plan, const std::vector<Code>& response) {
    CaseJudge judge(plan, plan.cases.front());
    judge.add(response);
    const auto judgement = judge.finish([&](std::int64_t first, std::span<Code> codes) -> Outcome<void> {
        std::copy_n(response.begin() + first * plan.signal.channels, codes.size(), codes.begin());
        return {};
    });
    if (!judgement) return to_text(judgement.error());
    std::string text;
    for (const RuleVerdict& rule : judgement->rules) {
        if (rule.verdict != Verdict::pass) {
            text += rule_block(rule, plan.signal, style);
        } else if (!rule.reason.empty()) {
            text += rule_title(rule) + ": pass; " + rule.reason + "\n";
        }
    }
    return text;
}

using Spoil = std::vector<Code> (*)(std::vector<Code>);

std::vector<Code> delayed(std::vector<Code> response, std::size_t samples) {
    response.insert(response.begin(), samples, 0);
    response.resize(response.size() - samples);
    return response;
}

void show_rules(Page& page) {
    const auto show = [&](std::string_view done, const Parts& parts, Spoil spoil) {
        const Plan plan = plan_of(page, done, parts);
        if (!plan.cases.empty()) page.show(done, judged(plan, spoil(right_response(plan))));
    };
    const auto as_it_is = [](std::vector<Code> r) { return r; };
    show("one code is wrong", small(""), [](std::vector<Code> r) { return r[500] += 3, r; });
    show("a response that comes a sample late", small(""), [](std::vector<Code> r) { return delayed(r, 1); });
    show("a response that comes 64 samples late", small(""), [](std::vector<Code> r) { return delayed(r, 64); });
    show("a response that has nothing to do with it", small(""), [](std::vector<Code> r) {
        for (std::size_t n = 0; n < r.size(); ++n) r[n] = static_cast<Code>(n * 7919 % 20011) - 10000;
        return r;
    });
    show("no signal, and a signal-to-noise ratio to hold",
         small("[[case.rule]]\nkind = \"error\"\nmin_snr_db = 60\n", "shape = \"silence\"\nlength_samples = 100\n"),
         [](std::vector<Code> r) { return r[50] = 1, r; });
    show("no signal, and none came back",
         small("[[case.rule]]\nkind = \"error\"\nmin_snr_db = 60\n", "shape = \"silence\"\nlength_samples = 100\n"),
         as_it_is);
    const std::string bands =
        "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 10, to_hz = 100, min_db = -1, max_db = 1 }]\n";
    show("a gain outside its band", small(bands, "shape = \"noise\"\nlength_samples = 8192\n"),
         [](std::vector<Code> r) {
             for (Code& code : r) code /= 2;
             return r;
         });
    Parts floats = small(bands, "shape = \"noise\"\nlength_samples = 8192\n");
    floats.signal = "rate_hz = 1200.0\ninput = \"f32\"\noutput = \"f32\"\n";
    floats.rule = "kind = \"error\"\nmax_ratio = 0.001\n";
    show("a response that is not a number", floats, [](std::vector<Code> r) {
        r[500] = std::bit_cast<Code>(std::numeric_limits<float>::quiet_NaN());
        return r;
    });
    show("a response that was cut off", small(bands, "shape = \"noise\"\nlength_samples = 8192\n"),
         [](std::vector<Code> r) { return r[500] = 32767, r; });
    show("gains too near their limit for the noise of the board",
         small("[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 1, to_hz = 6, max_db = 0 }]\n",
               "shape = \"noise\"\nlength_samples = 8192\n"),
         [](std::vector<Code> r) {
             for (std::size_t n = 0; n < r.size(); ++n) r[n] += static_cast<Code>(n * 7919 % 6007) - 3003;
             return r;
         });
    const auto spread = [](std::vector<Code> r) {
        std::uint64_t state = 1;
        for (Code& code : r) {
            state = state * 6364136223846793005U + 1442695040888963407U;
            code = std::clamp<Code>(code + static_cast<Code>(state >> 51) - 4096, -32768, 32767);
        }
        return r;
    };
    const std::string long_noise = "shape = \"noise\"\nlength_samples = 8192\nlevel_ratio = 0.5\n";
    show("phases of a board with noise",
         small("[[case.rule]]\nkind = \"response\"\nmax_phase_deg = 1\ndelta_deg = 0.01\n", long_noise), spread);
    show("one delay of a board with noise",
         small("[[case.rule]]\nkind = \"response\"\nmax_group_delay_samples = 0.1\nphase_from_hz = 10\n"
               "phase_to_hz = 20\n",
               long_noise),
         spread);
    show("a phase off the design",
         small("[[case.rule]]\nkind = \"response\"\nmax_phase_deg = 1\nmax_group_delay_samples = 0.1\n", long_noise),
         [](std::vector<Code> r) {
             for (std::size_t n = r.size() - 1; n > 0; --n) r[n] = (r[n] + r[n - 1]) / 2;
             return r;
         });
    show("a weighting that is another",
         small("[[case.rule]]\nkind = \"response\"\nmask = \"a-weighting class 1\"\n", long_noise),
         [](std::vector<Code> r) { return r; });
    show("a band filter that is none",
         small("[[case.rule]]\nkind = \"response\"\nmask = \"octave class 1\"\nmid_hz = 100\n", long_noise),
         [](std::vector<Code> r) { return r; });
    const std::string fraction = "[[case.rule]]\nkind = \"latency\"\nlatency_samples = 0\nmax_fraction_samples = ";
    show("a fraction of a latency near its limit", small(fraction + "0.01\n", long_noise), spread);
    show("a fraction of a latency beyond its limit", small(fraction + "0.25\n", long_noise), [](std::vector<Code> r) {
        for (std::size_t n = r.size() - 1; n > 0; --n) r[n] = (r[n] + r[n - 1]) / 2;
        return r;
    });
    show("a response of nothing",
         small(bands, "shape = \"sine\"\nlength_samples = 1200\nfrequency_hz = 50\nrealisations = 4\n"),
         [](std::vector<Code> r) { return std::vector<Code>(r.size()); });
}

/// What a sine and a step come to.
void show_figures(Page& page) {
    const auto show = [&](std::string_view done, const Parts& parts, Spoil spoil) {
        const Plan plan = plan_of(page, done, parts);
        if (!plan.cases.empty()) page.show(done, judged(plan, spoil(right_response(plan))));
    };
    const std::string sine = "shape = \"sine\"\nfrequency_hz = 30.7\nlength_samples = 4096\nlevel_ratio = 0.9\n";
    const auto tone = [&](const std::string& words) { return small("[[case.rule]]\nkind = \"tone\"\n" + words, sine); };
    const Spoil bent = [](std::vector<Code> r) {
        for (Code& code : r) code -= code / 256 * (code / 256) / 16;
        return r;
    };
    const Spoil noisy = [](std::vector<Code> r) {
        for (std::size_t n = 0; n < r.size(); ++n) r[n] += static_cast<Code>(n * n * 7919 % 601) - 300;
        return r;
    };
    show("a sine that is bent", tone("min_sinad_db = 80\nmin_enob_bits = 12\nmax_thd_db = -80\nmin_sfdr_db = 80\n"),
         bent);
    Parts folded = tone("max_thd_db = -80\n");
    folded.stimulus = "shape = \"sine\"\nfrequency_hz = 200\nlength_samples = 4096\nlevel_ratio = 0.9\n";
    show("a sine that is bent, and harmonics that fold", folded, bent);
    show("a sine in noise, whose distortion cannot be seen", tone("max_thd_db = -80\nmin_sfdr_db = 80\n"), noisy);
    show("a sine in noise, near its limit", tone("min_sinad_db = 42\n"), noisy);
    show("no sine came back", tone("min_sinad_db = 80\n"),
         [](std::vector<Code> r) { return std::vector<Code>(r.size()); });
    show("a sine of another frequency, to be fitted", tone("min_sinad_db = 80\nfrequency = \"fitted\"\n"),
         [](std::vector<Code> r) {
             for (std::size_t n = 0; n < r.size(); ++n)
                 r[n] = static_cast<Code>(std::lround(20000.0 * std::sin(0.17 * static_cast<double>(n))));
             return r;
         });

    const std::string step = "shape = \"step\"\nat_samples = 64\nlength_samples = 400\n";
    const auto transition = [&](const std::string& words) {
        return small("[[case.rule]]\nkind = \"transition\"\n" + words, step);
    };
    const Spoil low = [](std::vector<Code> r) {
        for (Code& code : r) code -= code / 4;
        return r;
    };
    show("a step that ends too low", transition("final_lsb = 2\nmax_overshoot_percent = 1\n"), low);
    show("a step that never gets to 90 %", transition("max_rise_samples = 4\n"), low);
    show("a step near its limit", transition("max_rise_samples = 3.2\n"), [](std::vector<Code> r) { return r; });
    show("a step that does not settle", transition("max_settling_samples = 50\n"), [](std::vector<Code> r) {
        for (std::size_t n = 200; n < r.size(); ++n) r[n] += n % 2 == 0 ? 600 : -600;
        return r;
    });
    show("a step that goes on moving", transition("final_lsb = 2\n"), [](std::vector<Code> r) {
        for (std::size_t n = 200; n < r.size(); ++n) r[n] += static_cast<Code>(10 * (n - 200));
        return r;
    });
    Parts floats = transition("max_rise_samples = 4\n");
    floats.signal = "rate_hz = 1200.0\ninput = \"f32\"\noutput = \"f32\"\n";
    floats.rule = "kind = \"error\"\nmax_ratio = 0.001\n";
    show("a step that is not a number", floats, [](std::vector<Code> r) {
        r[300] = std::bit_cast<Code>(std::numeric_limits<float>::quiet_NaN());
        return r;
    });
}

/// What remains, what is noise, and what drifts.
void show_quiet_rules(Page& page) {
    const auto show = [&](std::string_view done, const std::string& rule, const std::string& stimulus, auto spoil) {
        Parts parts = small("[[case.rule]]\n" + rule, stimulus);
        parts.rule = "kind = \"error\"\nmax_lsb = 30000\n";
        const Plan plan = plan_of(page, done, parts);
        if (!plan.cases.empty()) page.show(done, judged(plan, spoil(right_response(plan))));
    };
    const auto each = [](std::vector<Code> r, auto change) {
        for (std::size_t n = 0; n < r.size(); ++n) r[n] += change(n);
        return r;
    };
    const std::string impulse = "shape = \"impulse\"\nlength_samples = 200\nat_samples = 20\n";
    const std::string silence = "kind = \"silence\"\nmax_lsb = 0\n";
    show("silence, and nothing remains", silence, impulse, [](std::vector<Code> r) { return r; });
    show("silence, and a value that is stuck", silence, impulse,
         [&](std::vector<Code> r) { return each(r, [](std::size_t n) { return n > 22 ? 3 : 0; }); });
    show("silence, and a limit cycle", silence, impulse, [&](std::vector<Code> r) {
        return each(r, [](std::size_t n) { return n > 22 ? static_cast<Code>(n % 7) - 3 : 0; });
    });
    show("silence, and noise", silence, impulse, [&](std::vector<Code> r) {
        return each(r, [](std::size_t n) { return n > 22 ? static_cast<Code>(n * 7919 % 20011 % 5) - 2 : 0; });
    });
    show("silence that comes late", silence, impulse,
         [&](std::vector<Code> r) { return each(r, [](std::size_t n) { return n > 22 && n < 60 ? 1 : 0; }); });
    const std::string noise = "shape = \"noise\"\nlength_samples = 8192\n";
    const std::string gains = "kind = \"noise\"\nmin_gain_db = -6.1\nmax_gain = 0.251\nmax_excess_lsb = 0.3\n";
    show("noise that comes through too weak", gains, noise, [](std::vector<Code> r) {
        for (Code& code : r) code /= 2;
        return r;
    });
    show("noise that comes through stronger than the design says",
         "kind = \"noise\"\nmax_gain_db = 0.5\nrelative_to = \"design\"\n", noise, [](std::vector<Code> r) {
             for (Code& code : r) code += code / 2;
             return r;
         });
    show("noise that does not come through", gains, noise,
         [](std::vector<Code> r) { return std::vector<Code>(r.size()); });
    show("noise of a board near its limit", "kind = \"noise\"\nmax_excess_lsb = 4.9062\ndelta_db = 0.001\n", noise,
         [&](std::vector<Code> r) {
             return each(r, [](std::size_t n) { return static_cast<Code>(n * 7919 % 20011 % 17) - 8; });
         });
    const std::string slope = "kind = \"drift\"\nmax_slope_lsb_per_hour = 4000\nmax_change_lsb = 5\n";
    show("a drift", slope, noise,
         [&](std::vector<Code> r) { return each(r, [](std::size_t n) { return -static_cast<Code>(n / 400); }); });
    show("a drift near its limit", slope, noise,
         [&](std::vector<Code> r) { return each(r, [](std::size_t n) { return static_cast<Code>(n / 1100); }); });
    const auto of_floats = [&](std::string_view done, const std::string& rule, const std::string& stimulus,
                               std::size_t nan_at) {
        Parts parts = small("[[case.rule]]\n" + rule, stimulus);
        parts.signal = "rate_hz = 1200.0\ninput = \"f32\"\noutput = \"f32\"\n";
        parts.rule = "kind = \"latency\"\nlatency_samples = 0\n";
        const Plan plan = plan_of(page, done, parts);
        if (plan.cases.empty()) return;
        auto response = right_response(plan);
        response[nan_at] = std::bit_cast<Code>(std::numeric_limits<float>::quiet_NaN());
        page.show(done, judged(plan, response));
    };
    of_floats("noise that is not a number", "kind = \"noise\"\nmax_gain_db = 0\n", noise, 500);
    of_floats("a drift that is not a number", "kind = \"drift\"\nmax_change_ratio = 0.1\n", noise, 500);
    of_floats("silence that is not a number", "kind = \"silence\"\nmax_ratio = 0.1\n",
              "shape = \"impulse\"\nlength_samples = 200\nat_samples = 20\nlevel_ratio = 0.9\n", 100);
}

/// Rules that follow from the arithmetic.
void show_arithmetic(Page& page) {
    const auto show = [&](std::string_view done, const std::string& filter, const std::string& rule, Spoil spoil) {
        Parts parts = small("", "shape = \"noise\"\nlength_samples = 1000\nlevel_ratio = 0.9\n");
        parts.filter = "kind = \"fir\"\n" + filter;
        parts.rule = rule;
        const Plan plan = plan_of(page, done, parts);
        if (!plan.cases.empty()) page.show(done, judged(plan, spoil(right_response(plan))));
    };
    const auto as_it_is = [](std::vector<Code> r) { return r; };
    const std::string half =
        "taps = [0.5]\n[filter.arithmetic]\nrounding = \"half-up\"\ncoefficient_fraction_bits = 15\n";
    const std::string exact = "kind = \"exact\"\n";
    show("exact, and every code is right", half, exact, as_it_is);
    show("exact, and one code is wrong", half, exact, [](std::vector<Code> r) { return r[500] += 3, r; });
    show("exact, and two codes are wrong", half, exact,
         [](std::vector<Code> r) { return r[500] += 3, r[700] -= 1, r; });
    const std::string derived = "kind = \"error\"\nmax_lsb = \"derived\"\nrms_lsb = \"derived\"\n";
    show("a derived limit, and a code beyond it", half, derived, [](std::vector<Code> r) { return r[500] += 3, r; });
    const std::string large = "taps = [0.9, 0.9, 0.9]\n[filter.arithmetic]\nrounding = \"half-up\"\n";
    show("a derived limit, and an output that may wrap", large + "output_overflow = \"wrap\"\n", derived, as_it_is);
    show("a derived limit, and an output that may saturate", large, derived, as_it_is);
}

/// What the reader of plans does not let come so far.
void show_the_rest(Page& page) {
    Plan plan = plan_of(page, "no sample", small(""));
    page.show("no sample", judged(plan, {}));
    plan.filter_is_unknown = true;
    page.show("an error rule of an unknown filter", judged(plan, right_response(plan)));
    plan = plan_of(page, "a band without power",
                   small("[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 40, to_hz = 60, max_db = 1 }]\n",
                         "shape = \"sine\"\nlength_samples = 1200\nfrequency_hz = 50\nrealisations = 4\n"));
    for (Rule& rule : plan.cases.front().rules) {
        if (auto* response = std::get_if<ResponseRule>(&rule.kind)) response->bands.front().from_hz = 55.0;
    }
    page.show("a band without power", judged(plan, right_response(plan)));
    Case& the_case = plan.cases.front();
    the_case.start = Start::running;
    the_case.start_samples = 1200;
    for (const Refusal& refusal : refusals(plan, the_case))
        page.show("every sample discarded", refusal.problem + "\n  " + refusal.remedy);
}

void show_unchanged(Page& page) {
    Parts parts = small("[[case.rule]]\nkind = \"unchanged\"\n");
    parts.rule = "kind = \"latency\"\nlatency_samples = 0\n";
    const auto with = [&](std::string_view done, std::optional<double> max_lsb, std::size_t kept, std::size_t block,
                          void (*change)(AcceptedResponse&), Spoil spoil, int channels = 1) {
        Parts own = parts;
        if (channels > 1) own.signal += "channels = 2\n";
        Plan plan = plan_of(page, done, own);
        if (plan.cases.empty()) return;
        const auto response = right_response(plan);
        AcceptedResponse accepted = test::accepted(plan, plan.cases.front(), response, kept, block);
        change(accepted);
        plan.cases.front().rules = {test::unchanged_rule(std::move(accepted), max_lsb)};
        page.show(done, judged(plan, spoil(response)));
    };
    const auto nothing = [](AcceptedResponse&) {};
    const auto as_it_is = [](std::vector<Code> r) { return r; };
    const auto at_500 = [](std::vector<Code> r) { return r[500] += 3, r; };
    const auto at_500_and_501 = [](std::vector<Code> r) { return r[500] += 3, r[501] -= 4, r; };
    with("the same again", std::nullopt, 1000, 0, nothing, as_it_is);
    with("one sample differs", std::nullopt, 1000, 0, nothing, at_500);
    with("two samples differ, on the second of two channels", std::nullopt, 1000, 0, nothing, at_500_and_501, 2);
    with("a difference behind the kept samples, with hashes of stretches", std::nullopt, 400, 100, nothing, at_500);
    with("a difference behind the kept samples, with one hash", std::nullopt, 400, 0, nothing, at_500);
    with("a difference in the kept samples of a longer case", std::nullopt, 600, 100, nothing, at_500_and_501);
    with("a difference beyond max", 2.0, 1000, 0, nothing, at_500);
    with("a difference beyond max on one of two channels", 2.0, 1000, 0, nothing, at_500, 2);
    with("a difference that cannot be told from its hash", 5.0, 400, 100, nothing, at_500);
    with(
        "another length", std::nullopt, 1000, 0, [](AcceptedResponse& a) { a.samples = 1200; }, as_it_is);
    with(
        "another stimulus", std::nullopt, 1000, 0, [](AcceptedResponse& a) { a.stimulus_sha256 = "x"; }, as_it_is);
    with(
        "no hash", std::nullopt, 1000, 0, [](AcceptedResponse& a) { a.response_sha256.clear(); }, as_it_is);
    with(
        "more kept than there are", std::nullopt, 1000, 0, [](AcceptedResponse& a) { a.samples = 999; }, as_it_is);
    with(
        "hashes of stretches that are too few", std::nullopt, 400, 100,
        [](AcceptedResponse& a) { a.block_sha256.pop_back(); }, as_it_is);
    with(
        "kept samples that the hash contradicts", std::nullopt, 1000, 0,
        [](AcceptedResponse& a) { a.response_sha256 = "x"; }, as_it_is);
    with(
        "a hash that the kept samples contradict", std::nullopt, 1000, 0, [](AcceptedResponse& a) { a.kept[500] += 1; },
        as_it_is);
    const Plan plan = plan_of(page, "no baseline yet", parts);
    page.show("no baseline yet", judged(plan, right_response(plan)));
    Plan running = plan_of(page, "a case that starts running", parts);
    running.cases.front().start = Start::running;
    running.cases.front().rules = {
        test::unchanged_rule(test::accepted(running, running.cases.front(), right_response(running), 1000))};
    page.show("a case that starts running", judged(running, right_response(running)));
    Plan none = plan_of(page, "no accepted run", parts);
    none.cases.front().rules = {{UnchangedRule{}, {"plan.toml", 30, 1}}};
    page.show("no accepted run", judged(none, right_response(none)));
}

void show_summaries(Page& page) {
    const auto summary = [&](std::string_view done, const RunResult& run) {
        std::string text = summary_text(run, style);
        page.show(done, text);
    };
    RunResult run = sample::run();
    page.show("an invalid case", case_text(run, 2, style));
    run.cases[2].invalid.reset();
    page.show("an invalid case without a reason", case_text(run, 2, style));
    run.cases[0].grade = Grade::plausible;
    run.cases[0].start = Start::running;
    run.cases[0].start_samples = 1;
    page.show("a case whose capture is plausible", case_text(run, 0, style));
    page.show("a firmware that was not compared", board_text(run, std::nullopt, style));
    run.firmware = {FirmwareCheck::State::agrees, "cw7.elf", "3fa2b19c", true};
    run.board.serial.clear();
    page.show("a firmware that was there already, on a board without a serial number",
              board_text(run, std::nullopt, style));
    for (const std::string_view injection : {"buffer", "converter", "probe"})
        page.show("samples enter at: " + std::string(injection), not_seen_from(injection));
    run.firmware.state = FirmwareCheck::State::not_verified;
    run.firmware.image_file.clear();
    run.ended_by = Error{ErrorKind::interrupted, "", "it was interrupted", ""};
    summary("a run that was interrupted", run);
    run.firmware.image_file = "cw7.elf";
    run.cases.clear();
    summary("a run without a case, and an image that was not seen to run", run);
}

}  // namespace

void verdict_chapter(Page& page) {
    page.chapter("Rules that fail or are undecided");
    show_rules(page);
    show_figures(page);
    show_quiet_rules(page);
    show_arithmetic(page);
    show_the_rest(page);
    page.chapter("Responses that are to be unchanged");
    show_unchanged(page);
    page.chapter("What stands in the report of a run");
    show_summaries(page);
}

}  // namespace halflsb::diagnostics

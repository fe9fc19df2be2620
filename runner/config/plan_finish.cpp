// What only the plan as a whole can say of its cases.
#include <algorithm>

#include "runner/config/baseline_file.hpp"
#include "runner/config/plan_reader.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

Place place_of(const PlanPosition& position, const Problems& problems) {
    return problems.place_in(position.file, position.line, position.column);
}

/// The bands of a rule for every case were held to the rate of the signal, not to that of the case.
void check_bands(const Case& the_case, Problems& problems) {
    if (!the_case.rate_hz) return;
    const double nyquist_hz = *the_case.rate_hz / 2.0;
    for (const Rule& rule : the_case.rules) {
        const auto* response = std::get_if<ResponseRule>(&rule.kind);
        if (response == nullptr) continue;
        for (const ResponseBand& band : response->bands) {
            if (band.to_hz <= nyquist_hz) continue;
            problems.add(place_of(rule.position, problems),
                         "the band " + number_text(band.from_hz) + " to " + number_text(band.to_hz) +
                             " Hz ends above Nyquist of case " + quoted(the_case.name) + ", " +
                             number_text(nyquist_hz) + " Hz",
                         "give that case a response rule of its own");
            break;
        }
        // That of a standard is judged as far as Nyquist.
        const bool is_file = response->mask && response->mask->source.empty();
        if (is_file && !(response->mask->to_hz() <= nyquist_hz)) {
            problems.add(place_of(rule.position, problems),
                         "the mask of " + quoted(response->mask->name) + " ends above Nyquist of case " +
                             quoted(the_case.name) + ", " + number_text(nyquist_hz) + " Hz",
                         "give that case a response rule of its own");
        }
    }
}

void check_rules(const Plan& plan, const Case& the_case, Problems& problems) {
    if (!plan.filter_is_unknown || !the_case.rules.empty()) return;
    problems.add(
        place_of(the_case.position, problems), "no rule looks at case " + quoted(the_case.name),
        "of an unknown filter nothing is judged without asking: add a rule of kind \"repeat\" or \"unchanged\"");
}

}  // namespace

void finish_cases(ReadContext& context, Plan& plan) {
    for (const Case& the_case : plan.cases) {
        check_bands(the_case, context.problems);
        check_rules(plan, the_case, context.problems);
    }
    BaselineFiles baselines(context);
    for (Case& the_case : plan.cases) {
        for (Rule& rule : the_case.rules) {
            if (auto* unchanged = std::get_if<UnchangedRule>(&rule.kind))
                baselines.take(plan, the_case, place_of(rule.position, context.problems), *unchanged);
        }
    }
}

}  // namespace halflsb

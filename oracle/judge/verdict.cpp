#include "oracle/judge/verdict.hpp"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>

namespace halflsb {

std::string_view name_of(Verdict verdict) {
    switch (verdict) {
        case Verdict::pass:
            return "pass";
        case Verdict::undecided:
            return "undecided";
        case Verdict::fail:
            return "fail";
    }
    return "";
}

std::string_view name_of(Grade grade) {
    switch (grade) {
        case Grade::proven:
            return "proven";
        case Grade::plausible:
            return "plausible";
        case Grade::broken:
            return "broken";
    }
    return "";
}

std::string_view name_of(CaseVerdict verdict) {
    switch (verdict) {
        case CaseVerdict::pass:
            return "pass";
        case CaseVerdict::undecided:
            return "undecided";
        case CaseVerdict::invalid:
            return "invalid";
        case CaseVerdict::fail:
            return "fail";
    }
    return "";
}

Verdict worst_of(const std::vector<JudgedFigure>& figures) {
    Verdict worst = Verdict::pass;
    for (const JudgedFigure& figure : figures) worst = std::max(worst, figure.verdict);
    return worst;
}

CaseVerdict verdict_of(const std::vector<RuleVerdict>& rules) {
    CaseVerdict worst = CaseVerdict::pass;
    for (const RuleVerdict& rule : rules) {
        if (rule.verdict == Verdict::fail) return CaseVerdict::fail;
        if (rule.verdict == Verdict::undecided) worst = CaseVerdict::undecided;
    }
    return worst;
}

double judged(double value) {
    if (!std::isfinite(value)) return value;
    // to_chars and from_chars round correctly and know no locale.
    std::array<char, 64> text;
    const auto end = std::to_chars(text.data(), text.data() + text.size(), value, std::chars_format::scientific, 8).ptr;
    double rounded = value;
    std::from_chars(text.data(), end, rounded);
    return rounded;
}

}  // namespace halflsb

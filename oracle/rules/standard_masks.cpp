#include "oracle/rules/standard_masks.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "oracle/rules/rule_words.hpp"
#include "oracle/rules/weighting_curves.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {
namespace {

constexpr double none = std::numeric_limits<double>::infinity();

/// Acceptance limits of A and C weighting, IEC 61672-1:2013, table 3, at 1000 * 10^(n / 10) Hz, in dB around the design
/// goal. Read in public transcriptions that cite the table, not in the primary text. Editions are not mixed: the limits
/// of 2002 are wider, as they hold the uncertainty of the measurement.
struct WeightingRow {
    int n;
    double class1_min, class1_max, class2_min, class2_max;
};
constexpr WeightingRow weighting_rows[] = {
    {-20, -none, 3, -none, 5}, {-19, -none, 2.5, -none, 5}, {-18, -4, 2, -none, 5},  {-17, -2, 2, -3, 3},
    {-16, -1.5, 2, -3, 3},     {-15, -1.5, 1.5, -3, 3},     {-14, -1, 1, -2, 2},     {-13, -1, 1, -2, 2},
    {-12, -1, 1, -2, 2},       {-11, -1, 1, -2, 2},         {-10, -1, 1, -1.5, 1.5}, {-9, -1, 1, -1.5, 1.5},
    {-8, -1, 1, -1.5, 1.5},    {-7, -1, 1, -1.5, 1.5},      {-6, -1, 1, -1.5, 1.5},  {-5, -1, 1, -1.5, 1.5},
    {-4, -1, 1, -1.5, 1.5},    {-3, -1, 1, -1.5, 1.5},      {-2, -1, 1, -1.5, 1.5},  {-1, -1, 1, -1.5, 1.5},
    {0, -0.7, 0.7, -1, 1},     {1, -1, 1, -1.5, 1.5},       {2, -1, 1, -2, 2},       {3, -1, 1, -2, 2},
    {4, -1, 1, -2.5, 2.5},     {5, -1, 1, -2.5, 2.5},       {6, -1, 1, -3, 3},       {7, -1.5, 1.5, -3.5, 3.5},
    {8, -2, 1.5, -4.5, 4.5},   {9, -2.5, 1.5, -5, 5},       {10, -3, 2, -none, 5},   {11, -5, 2, -none, 5},
    {12, -16, 2.5, -none, 5},  {13, -none, 3, -none, 5},
};

/// Relative attenuation of an octave-band filter, IEC 61260-1:2014, table 1, at G^x times the middle and, mirrored, at
/// G^-x, in dB. From public transcriptions that cite the table, not from the primary text. The edge of the band has two
/// rows, just inside and just outside of it.
struct BandFilterRow {
    double x;
    double class1_min, class1_max, class2_min, class2_max;
};
constexpr BandFilterRow band_filter_rows[] = {
    {0.0, -0.4, 0.4, -0.6, 0.6},   {0.125, -0.4, 0.5, -0.6, 0.7}, {0.25, -0.4, 0.7, -0.6, 0.9},
    {0.375, -0.4, 1.4, -0.6, 1.7}, {0.5, -0.4, 5.3, -0.6, 5.8},   {0.5, 1.2, none, 0.8, none},
    {1.0, 16.6, none, 15.6, none}, {2.0, 40.5, none, 39.5, none}, {3.0, 60.0, none, 54.0, none},
    {4.0, 70.0, none, 60.0, none},
};

struct StandardMask {
    std::string_view name;
    NominalCurve nominal;
    int class_number;     ///< 0: the standard has none
    int bands_an_octave;  ///< of a band filter, else 0
};

constexpr StandardMask masks[] = {
    {"a-weighting class 1", NominalCurve::a_weighting, 1, 0},
    {"a-weighting class 2", NominalCurve::a_weighting, 2, 0},
    {"c-weighting class 1", NominalCurve::c_weighting, 1, 0},
    {"c-weighting class 2", NominalCurve::c_weighting, 2, 0},
    {"octave class 1", NominalCurve::none, 1, 1},
    {"octave class 2", NominalCurve::none, 2, 1},
    {"third-octave class 1", NominalCurve::none, 1, 3},
    {"third-octave class 2", NominalCurve::none, 2, 3},
    {"k-weighting", NominalCurve::k_weighting, 0, 0},
};

/// IEC 61260-1:2014, formulas 9 and 10, from the same transcriptions: what G^x of an octave filter becomes for one of
/// 1 / b octave.
double band_ratio(double x, int bands_an_octave) {
    const auto g = [](double power) { return std::pow(10.0, 0.3 * power); };
    if (bands_an_octave == 1) return g(x);
    const double b = bands_an_octave;
    return 1.0 + (g(0.5 / b) - 1.0) / (g(0.5) - 1.0) * (g(x) - 1.0);
}

std::vector<MaskCorner> band_filter_corners(const StandardMask& mask, double mid_hz) {
    std::vector<MaskCorner> upper, all;
    for (const BandFilterRow& row : band_filter_rows) {
        const bool first = mask.class_number == 1;
        upper.push_back({band_ratio(row.x, mask.bands_an_octave),
                         {first ? -row.class1_max : -row.class2_max, first ? -row.class1_min : -row.class2_min}});
    }
    for (auto corner = upper.rbegin(); corner + 1 != upper.rend(); ++corner)
        all.push_back({mid_hz / corner->hz, corner->limits});
    for (const MaskCorner& corner : upper) all.push_back({mid_hz * corner.hz, corner.limits});
    return all;
}

std::vector<MaskCorner> weighting_corners(const StandardMask& mask) {
    std::vector<MaskCorner> all;
    for (const WeightingRow& row : weighting_rows) {
        const double hz = 1000.0 * std::pow(10.0, row.n / 10.0);
        all.push_back({hz, mask.class_number == 1 ? MaskLimits{row.class1_min, row.class1_max}
                                                  : MaskLimits{row.class2_min, row.class2_max}});
    }
    return all;
}

std::string source_of(const StandardMask& mask) {
    if (mask.nominal == NominalCurve::k_weighting) return "ITU-R BS.1770-4, annex 1";
    return std::string(mask.bands_an_octave > 0 ? "IEC 61260-1:2014, table 1" : "IEC 61672-1:2013, table 3") +
           ", class " + std::to_string(mask.class_number);
}

/// The word that this mask wants or does not know.
std::optional<Error> wrong_word(const StandardMask& mask, const StandardMaskWords& words) {
    const std::string of_mask = "mask = \"" + std::string(mask.name) + "\"";
    const bool is_band = mask.bands_an_octave > 0, has_limits = mask.class_number > 0;
    if (is_band && !words.mid_hz)
        return refused_word("mask", of_mask + " has no mid_hz", "give the middle of the band, mid_hz = 1000.0");
    if (!is_band && words.mid_hz)
        return refused_word("mid_hz", "mid_hz is the middle of a band filter, and " + of_mask + " is none",
                            "leave it out");
    if (!has_limits && !words.tolerance_db) {
        return refused_word("mask", of_mask + " has no tolerance_db: its standard gives no limits",
                            "say how far the gain may be off, tolerance_db = 0.1");
    }
    if (has_limits && words.tolerance_db)
        return refused_word("tolerance_db", of_mask + " brings its own limits", "leave tolerance_db out");
    if (is_band && words.reference_hz) {
        return refused_word("reference_hz", of_mask + " refers to the middle of its band",
                            "leave reference_hz out; reference_db says the gain there");
    }
    if (words.reference_hz && !std::isfinite(nominal_db(mask.nominal, *words.reference_hz)))
        return refused_word("reference_hz", "the weighting has no gain at reference_hz", "give 1000.0");
    if (mask.nominal == NominalCurve::k_weighting && words.reference_db && !words.reference_hz)
        return refused_word("reference_db", of_mask + " has its own gain, and reference_db says another",
                            "say where it holds, reference_hz = 1000.0");
    return std::nullopt;
}

}  // namespace

const std::vector<std::string_view>& standard_mask_names() {
    static const std::vector<std::string_view> names = [] {
        std::vector<std::string_view> found;
        for (const StandardMask& mask : masks) found.push_back(mask.name);
        return found;
    }();
    return names;
}

Outcome<ResponseMask> standard_mask(std::string_view name, const StandardMaskWords& words) {
    const StandardMask& asked =
        *std::find_if(std::begin(masks), std::end(masks), [&](const StandardMask& each) { return each.name == name; });
    if (auto error = wrong_word(asked, words)) return *error;
    ResponseMask mask;
    mask.name = name;
    mask.source = source_of(asked);
    mask.nominal = asked.nominal;
    const double reference_db = words.reference_db.value_or(0.0);
    std::string refers = number_text(reference_db) + " dB at ";
    if (asked.bands_an_octave > 0) {
        mask.corners = band_filter_corners(asked, *words.mid_hz);
        mask.ends_stay = true;
        mask.shift_db = reference_db;
        refers += number_text(*words.mid_hz) + " Hz";
        mask.claim = "a pass says: filter within the band limits, not instrument conformity";
    } else {
        if (asked.class_number > 0) {
            mask.corners = weighting_corners(asked);
            mask.between = ResponseMask::Between::wider;
        } else {
            // The range of the published gains that this was checked with.
            const MaskLimits limits{-*words.tolerance_db, *words.tolerance_db};
            mask.corners = {{10.0, limits}, {20000.0, limits}};
        }
        if (asked.nominal == NominalCurve::k_weighting && !words.reference_hz) {
            refers = "its own gain, 0.691 dB at 997 Hz";
        } else {
            const double reference_hz = words.reference_hz.value_or(1000.0);
            mask.shift_db = reference_db - nominal_db(asked.nominal, reference_hz);
            refers += number_text(reference_hz) + " Hz";
        }
        mask.claim = "a pass says: filter within the weighting limits, not instrument conformity";
    }
    mask.source += ", with " + refers;
    return mask;
}

}  // namespace halflsb

#include "oracle/measure/quantile.hpp"

#include <boost/math/distributions/chi_squared.hpp>
#include <boost/math/distributions/normal.hpp>
#include <boost/math/distributions/students_t.hpp>
#include <limits>

namespace halflsb {
namespace {

namespace math = boost::math;

// No exceptions across this face, and no promotion to long double: the same figures on every machine.
using Policy = math::policies::policy<math::policies::domain_error<math::policies::ignore_error>,
                                      math::policies::pole_error<math::policies::ignore_error>,
                                      math::policies::overflow_error<math::policies::ignore_error>,
                                      math::policies::evaluation_error<math::policies::ignore_error>,
                                      math::policies::promote_double<false>>;

}  // namespace

double normal_quantile_above(double probability) {
    return math::quantile(math::complement(math::normal_distribution<double, Policy>(), probability));
}

double student_quantile_above(double probability, double degrees) {
    if (!(degrees > 0.0)) return std::numeric_limits<double>::infinity();
    return math::quantile(math::complement(math::students_t_distribution<double, Policy>(degrees), probability));
}

double chi_square_quantile_above(double probability, double degrees) {
    return math::quantile(math::complement(math::chi_squared_distribution<double, Policy>(degrees), probability));
}

}  // namespace halflsb

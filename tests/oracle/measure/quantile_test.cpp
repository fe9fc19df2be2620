#include "oracle/measure/quantile.hpp"

#include <catch2/catch.hpp>
#include <cmath>

using namespace halflsb;

// Values of mpmath at 40 digits, COMPUTED (SciPy 1.10.1 is off by up to 2e-9 for Student's t). A quantile magnifies an
// ulp of the probability by less than 10; 1e-12 is a thousand of them.
TEST_CASE("quantile: the tails agree with forty digits to 1e-12", "[measure]") {
    CHECK(normal_quantile_above(1e-6) == Approx(4.7534243088228989).epsilon(1e-12));
    CHECK(normal_quantile_above(1e-3) == Approx(3.0902323061678135).epsilon(1e-12));
    CHECK(normal_quantile_above(0.5) == Approx(0.0).margin(1e-15));
    CHECK(student_quantile_above(0.025, 1.0) == Approx(12.706204736174705).epsilon(1e-12));
    CHECK(student_quantile_above(0.025, 7.5) == Approx(2.3330396268649746).epsilon(1e-12));
    CHECK(student_quantile_above(1e-10, 30.0) == Approx(9.3774897804071432).epsilon(1e-12));
    CHECK(student_quantile_above(1e-8, 254.0) == Approx(5.7965445076088143).epsilon(1e-12));
    CHECK(chi_square_quantile_above(0.025, 3.0) == Approx(9.3484036044961478).epsilon(1e-12));
    CHECK(chi_square_quantile_above(0.975, 40.0) == Approx(24.433039170807888).epsilon(1e-12));
}

TEST_CASE("quantile: without degrees of freedom nothing is known", "[measure]") {
    CHECK(std::isinf(student_quantile_above(0.025, 0.0)));
    CHECK(std::isinf(student_quantile_above(0.025, -1.0)));
    CHECK(std::isinf(student_quantile_above(0.025, std::nan(""))));
}

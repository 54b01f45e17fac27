// Errors: a code, a sentence, a cure and an exit status.
#include "core/base/error.h"

#include <gtest/gtest.h>

#include <limits>
#include <string>

#include "core/base/material.h"
#include "core/base/progress.h"

namespace runband {
namespace {

TEST(Error, TheHundredsOfTheCodeGiveTheExitStatus) {
  EXPECT_EQ(InputError(ErrorCode::unknown_key, "x", "").exit_status(), 2);
  EXPECT_EQ(InputError(ErrorCode::profile_spike, "x", "").exit_status(), 2);
  EXPECT_EQ(InputError(ErrorCode::no_contact, "x", "").exit_status(), 2);
  EXPECT_EQ(FileError(ErrorCode::file_unwritable, "x", "").exit_status(), 3);
  EXPECT_EQ(NotConverged("the patch", 3, 0.5, "").exit_status(), 4);
  EXPECT_EQ(PluginError(ErrorCode::plugin_missing, "x", "").exit_status(), 5);
  EXPECT_EQ(Cancelled().exit_status(), 130);
}

TEST(Error, TheCureStandsOnItsOwnLine) {
  const Error with(ErrorCode::bad_syntax, "case.toml:3: not a number.", "write 1.5, not 1,5.");
  EXPECT_STREQ(with.what(), "case.toml:3: not a number.\n  write 1.5, not 1,5.");
  EXPECT_EQ(with.message(), "case.toml:3: not a number.");
  EXPECT_EQ(with.cure(), "write 1.5, not 1,5.");
  EXPECT_STREQ(Error(ErrorCode::bad_syntax, "Short.", "").what(), "Short.");
}

TEST(Error, CodesKeepTheirNumbers) {
  // Numbers are promised to scripts; they never change.
  EXPECT_EQ(static_cast<int>(ErrorCode::out_of_range), 101);
  EXPECT_EQ(static_cast<int>(ErrorCode::profile_crosses_itself), 112);
  EXPECT_EQ(static_cast<int>(ErrorCode::no_contact), 130);
  EXPECT_EQ(static_cast<int>(ErrorCode::file_unreadable), 201);
  EXPECT_EQ(static_cast<int>(ErrorCode::not_converged), 301);
  EXPECT_EQ(static_cast<int>(ErrorCode::plugin_incompatible), 401);
  EXPECT_EQ(static_cast<int>(ErrorCode::cancelled), 501);
}

TEST(Error, OutOfRangeSaysWhereWhatAndWhatToDo) {
  const InputError error = out_of_range("case.toml:7", "gauge_mm", -3.5, "mm", "above 0");
  EXPECT_EQ(error.message(), "case.toml:7: gauge_mm is -3.5 mm; it must be above 0.");
  EXPECT_EQ(error.cure(), "correct the value of gauge_mm.");
  EXPECT_EQ(out_of_range("", "coefficient", 2.0, "1", "at most 1").message(),
            "coefficient is 2; it must be at most 1.");
}

TEST(Error, RequirePositiveLetsOnlyFinitePositiveNumbersPass) {
  EXPECT_NO_THROW(require_positive("here", "x", 1e-300, "mm"));
  for (const double bad :
       {0.0, -1.0, std::numeric_limits<double>::quiet_NaN(), std::numeric_limits<double>::infinity()})
    EXPECT_THROW(require_positive("here", "x", bad, "mm"), InputError) << bad;
}

TEST(Error, NotConvergedCarriesHowFarItCame) {
  const NotConverged error("The pressure", 60, 0.0123456, "try fewer cells.");
  EXPECT_EQ(error.code(), ErrorCode::not_converged);
  EXPECT_EQ(error.iterations, 60);
  EXPECT_EQ(error.residual, 0.0123456);
  EXPECT_EQ(error.message(), "The pressure did not converge: residual 0.0123 after 60 iterations.");
}

TEST(Progress, ReportsUntilToldToStop) {
  std::stop_source source;
  std::string heard;
  const Progress progress{[&](double fraction, std::string_view what) {
                            heard += std::string(what) + std::to_string(static_cast<int>(100.0 * fraction));
                          },
                          source.get_token()};
  progress.at(0.5, "half");
  EXPECT_EQ(heard, "half50");
  source.request_stop();
  EXPECT_THROW(progress.at(0.75, "more"), Cancelled);
  EXPECT_EQ(heard, "half50");
  EXPECT_NO_THROW(Progress{}.at(1.0, "nobody listens"));
}

TEST(Material, ContactModulusOfLikeSteels) {
  // 1/E* = 2 (1 - nu^2)/E: 113932.291667 MPa for nu = 0.28 and 115384.615385 for 0.30 at E = 210 GPa (by hand).
  MaterialPair steel;
  EXPECT_NEAR(steel.contact_modulus_MPa(), 113932.291667, 1e-6);
  steel.wheel.poisson_ratio = steel.rail.poisson_ratio = 0.30;
  EXPECT_NEAR(steel.contact_modulus_MPa(), 115384.615385, 1e-6);
  EXPECT_DOUBLE_EQ((Material{200000.0, 0.25}).shear_modulus_MPa(), 80000.0);
}

}  // namespace
}  // namespace runband

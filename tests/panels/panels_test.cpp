// Real events through every panel; what is asserted is the desk's state and numbers.
#include <gtest/gtest.h>
#include <unistd.h>

#include <cmath>
#include <filesystem>
#include <set>

#include "core/base/error.h"
#include "core/base/file.h"
#include "tests/panels/driver.h"
#include "viewer/panels/overlay.h"
#include "viewer/plot/png_file.h"

namespace runband {
namespace {

std::filesystem::path fresh_folder(const std::string& name) {
  const auto folder = std::filesystem::temp_directory_path() / ("runband_panels_" + name + std::to_string(::getpid()));
  std::filesystem::remove_all(folder);
  std::filesystem::create_directories(folder);
  return folder;
}

TEST(LeftColumn, DraggingASliderMovesTheWheelsetAndIsOneStep) {
  Driver user;
  user.open("curve12.toml");
  const double before = user.lateral();
  const plot::Box track = user.where("state.lateral");
  user.drag({track.x + track.width * 0.7, track.centre().y}, {track.x + track.width * 0.25, track.centre().y});
  EXPECT_NEAR(user.lateral(), -4.0, 0.15) << "a quarter along a track from -8 to 8 mm";
  ASSERT_TRUE(user.desk.now().solution);
  EXPECT_EQ(user.desk.now().solution->asked.state.lateral_mm.front(), user.lateral());
  user.key(Key::z, kCtrl);
  EXPECT_EQ(user.lateral(), before);
  user.key(Key::z, kCtrlShift);
  EXPECT_NEAR(user.lateral(), -4.0, 0.15);
}

TEST(LeftColumn, ANumberIsTypedWithCommaAndMinus) {
  Driver user;
  user.open("curve12.toml");
  user.click("state.lateral/number");
  user.type("-1,25");
  user.key(Key::enter);
  EXPECT_DOUBLE_EQ(user.lateral(), -1.25);
  user.click("friction/number");
  user.type("7");
  user.key(Key::enter);
  EXPECT_DOUBLE_EQ(user.current().friction, 0.8) << "taken back into its range";
  user.click("friction/number");
  user.type("abc");
  user.key(Key::enter);
  EXPECT_DOUBLE_EQ(user.current().friction, 0.8) << "what is no number changes nothing";
}

TEST(LeftColumn, KeysReachASlider) {
  Driver user;
  user.open("curve12.toml");
  // Tab until the yaw slider has the focus.
  for (int k = 0; k < 60 && user.frame.ui().focus() != "state.yaw"; ++k) user.key(Key::tab);
  ASSERT_EQ(user.frame.ui().focus(), "state.yaw");
  const double yaw = user.current().state.yaw_mrad, lateral = user.lateral();
  user.key(Key::right);
  EXPECT_NEAR(user.current().state.yaw_mrad, yaw + 0.1, 1e-9);
  EXPECT_EQ(user.lateral(), lateral) << "the arrows belong to the focused control";
}

TEST(LeftColumn, AMethodIsChosenFromItsList) {
  Driver user;
  user.open("curve12.toml");
  user.click("patch.method");
  ASSERT_TRUE(user.shown("patch.method/1"));
  user.click("patch.method/1");
  EXPECT_EQ(user.current().patch.method, PatchMethod::half_space);
  EXPECT_EQ(user.desk.now().solution->contacts.back().patch->method, PatchMethod::half_space);
}

TEST(LeftColumn, AnotherProfileIsChosenAndABadOneIsRefusedWithItsReason) {
  Driver user;
  user.open("curve12.toml");
  user.click("profile/1");
  ASSERT_EQ(user.desk.prompt.kind, Prompt::Kind::profile);
  user.click("standard/S1002");
  EXPECT_EQ(user.current().wheels[1].profile, "standard:S1002");
  EXPECT_NE(user.current().wheels[0].profile, "standard:S1002");
  EXPECT_EQ(user.desk.prompt.kind, Prompt::Kind::none);

  user.click("profile/0");
  user.key(Key::a, kCtrl);
  user.type("no_such_profile.csv");
  user.key(Key::enter);
  EXPECT_EQ(user.desk.prompt.kind, Prompt::Kind::profile) << "the question stays";
  EXPECT_NE(user.desk.prompt.problem.find("no_such_profile.csv"), std::string::npos) << user.desk.prompt.problem;
  user.key(Key::escape);
  EXPECT_EQ(user.desk.prompt.kind, Prompt::Kind::none);
}

TEST(Strip, ThePointerIsTheWheelset) {
  Driver user;
  user.open("curve12.toml");
  const plot::Box strip = user.where("strip");
  user.drag({strip.x + strip.width * 0.5, strip.centre().y}, {strip.x + strip.width * 0.75, strip.centre().y});
  EXPECT_GT(user.lateral(), 3.2);
  EXPECT_LT(user.lateral(), 4.6);
  user.key(Key::z, kCtrl);
  user.click("strip/contact_angle");
  EXPECT_EQ(user.desk.view().curve, "contact_angle");
  user.key(Key::n0);
  EXPECT_EQ(user.lateral(), 0);
}

TEST(Strip, PlayMovesAndStops) {
  Driver user;
  user.open("curve12.toml");
  user.host.key(Key::space);
  std::set<double> places;
  for (int k = 0; k < 40; ++k) {
    user.host.pass(0.1);
    user.frame.step();
    places.insert(user.lateral());
  }
  EXPECT_TRUE(user.desk.playing());
  EXPECT_GT(places.size(), 20U);
  user.key(Key::space);
  EXPECT_FALSE(user.desk.playing());
  user.key(Key::z, kCtrl);
  EXPECT_EQ(user.lateral(), 3.0) << "the whole movement is one step";
}

TEST(SceneSheet, DragTurnsWheelZoomsAndNamedViewsReturn) {
  Driver user;
  user.open("curve12.toml");
  ASSERT_NE(user.frame.scene(), nullptr);
  const CameraPlace home = user.frame.scene()->camera();
  const plot::Box scene = user.where("scene");
  const plot::Point corner{scene.right() - 60, scene.centre().y};
  user.drag(corner, {corner.x - 90, corner.y + 25});
  EXPECT_FALSE(user.frame.scene()->camera() == home);
  EXPECT_NEAR((user.frame.scene()->camera().focus_mm - home.focus_mm).norm(), 0, 1e-9) << "turning keeps the focus";
  user.host.move(corner.x, corner.y);
  user.host.wheel(3);
  user.settle();
  const CameraPlace near = user.frame.scene()->camera();
  EXPECT_LT((near.eye_mm - near.focus_mm).norm(), (home.eye_mm - home.focus_mm).norm());
  user.key(Key::home);
  EXPECT_NEAR((user.frame.scene()->camera().eye_mm - home.eye_mm).norm(), 0, 1e-9);
  user.click("view.top");
  EXPECT_GT(user.frame.scene()->camera().eye_mm.z(), 4000);
}

TEST(SceneSheet, TheProbeReadsWhatTheSolutionHolds) {
  Driver user;
  user.open("curve12.toml");
  user.key(Key::h);
  const Solution& solution = *user.desk.now().solution;
  const SceneOverlay overlay = layout_overlay(user.desk, solution, user.frame.scene(), user.where("scene"), 1);
  ASSERT_TRUE(overlay.detail);
  const Contact& contact = solution.contacts[overlay.contact];
  const Grid& g = contact.patch->grid;
  const int i = g.nx / 2, j = g.ns / 2;
  const plot::Point at = overlay.detail->at(g.x(i), g.s(j));
  user.host.move(at.x, at.y);
  user.settle();
  ASSERT_TRUE(user.frame.probed());
  const double pressure = contact.patch->pressure.values[static_cast<std::size_t>(j * g.nx + i)];
  EXPECT_EQ(user.frame.probed()->rows[1][1], plot::number_with_digits(pressure, 4));
  EXPECT_GT(user.frame.probed()->rows.size(), 6U) << "every field there is read";
  // A click pins it; the pin stays when the state moves on, with the state it was read in.
  user.click_at(at);
  ASSERT_EQ(user.desk.view().pins.size(), 1U);
  const Pin pin = user.desk.view().pins[0];
  EXPECT_NE(pin.words.find("MPa"), std::string::npos);
  user.key(Key::left);
  EXPECT_EQ(user.desk.view().pins[0].words, pin.words);
  EXPECT_NE(pin.state.find("3.00"), std::string::npos) << pin.state;
  user.key(Key::z, kCtrl);
  user.key(Key::z, kCtrl);
  EXPECT_TRUE(user.desk.view().pins.empty());
}

TEST(SceneSheet, AFieldOfAnyAnalysisColoursThePatch) {
  Driver user;
  user.open("curve12.toml");
  user.key(Key::h);
  const plot::Image before = user.picture();
  user.click("field");
  std::size_t wanted = 0;
  const auto fields = user.desk.fields();
  for (std::size_t k = 0; k < fields.size(); ++k)
    if (fields[k].first == "wear.frictional_power") wanted = k;
  ASSERT_GT(wanted, 0U);
  user.click("field/" + std::to_string(wanted));
  EXPECT_EQ(user.desk.view().field, "wear.frictional_power");
  EXPECT_NE(user.picture().rgba, before.rgba);
  user.key(Key::l);
  ASSERT_TRUE(user.desk.view().locked_range);
  const plot::Range locked = *user.desk.view().locked_range;
  user.key(Key::left, kShift);
  EXPECT_EQ(shown_field(user.desk, *user.desk.now().solution).range, locked) << "the range stays while the state moves";
}

TEST(ProfilesSheet, ShowsBothPairsAndTheirReadings) {
  Driver user;
  user.open("curve12.toml");
  user.key(Key::n2);
  EXPECT_TRUE(user.shown("section/left"));
  EXPECT_TRUE(user.shown("section/right"));
  user.click("profiles/1");
  EXPECT_TRUE(user.shown("below/1/left"));
  user.click("profiles/2");
  bool reads = false;
  for (const std::string& id : user.frame.ui().ids()) reads = reads || id.starts_with("left/wheel.");
  EXPECT_TRUE(reads);
}

TEST(Curves, WheelZoomsDragPansDoubleClickResetsAndCtrlCCopies) {
  Driver user;
  user.open("curve12.toml");
  user.key(Key::n3);
  const plot::Point centre = user.where("curve/traverse.rrd").centre();
  user.host.move(centre.x, centre.y);
  user.host.wheel(2);
  user.settle();
  const PlotView& view = user.frame.plot_view("curve/traverse.rrd");
  ASSERT_TRUE(view.x);
  const double span = view.x->span(), low = view.x->low;
  EXPECT_LT(span, 15.0);
  user.drag(centre, {centre.x + 60, centre.y});
  EXPECT_LT(view.x->low, low);
  EXPECT_NEAR(view.x->span(), span, 1e-6);
  user.key(Key::c, kCtrl);
  EXPECT_NE(user.host.clipboard().find("lateral displacement (mm)"), std::string::npos);
  EXPECT_GT(user.host.clipboard().size(), 1000U);
  user.host.press(MouseButton::left, true);
  user.host.press(MouseButton::left, false);
  user.host.press(MouseButton::left, true);
  user.host.press(MouseButton::left, false);
  user.settle();
  EXPECT_FALSE(view.x);
}

TEST(AnalysesSheet, AParameterIsChangedFromItsDescriptionAndReset) {
  Driver user;
  user.open("curve12.toml");
  user.key(Key::n4);
  user.click("page/slip_bands");
  user.click("slip_bands.method");
  user.click("slip_bands.method/5");
  const auto& asked = user.current().analyses.at("slip_bands");
  EXPECT_EQ(std::get<std::string>(asked.at("method")), "polach");
  ASSERT_TRUE(user.shown("slip_bands.method/reset"));
  user.click("slip_bands.method/reset");
  EXPECT_FALSE(user.current().analyses.contains("slip_bands"));
}

TEST(Compare, TwoStatesOneRangeAndTheirDifference) {
  Driver user;
  user.open("curve12.toml");
  user.key(Key::k);
  ASSERT_TRUE(user.desk.two());
  user.key(Key::right, kShift);
  user.key(Key::n5);
  user.click("compare.difference");
  EXPECT_TRUE(user.desk.view().compare_difference);
  user.click("compare.swap");
  EXPECT_EQ(user.desk.active(), 1);
  user.key(Key::a);
  EXPECT_EQ(user.desk.active(), 0);
  user.click("compare.close");
  EXPECT_FALSE(user.desk.two());
}

TEST(Compare, TheDifferenceOfAPatchWithItselfIsZeroAndItsSignIsBMinusA) {
  Driver user;
  user.open("curve12.toml");
  const Contact& contact = user.desk.now().solution->contacts.back();
  const plot::HeatMap none = difference_map(contact, contact.patch->pressure, contact, contact.patch->pressure);
  for (const double v : none.values)
    if (!std::isnan(v)) {
      ASSERT_EQ(v, 0);
    }
  Contact heavier = contact;
  for (double& p : heavier.patch->pressure.values) p *= 2;
  const plot::HeatMap more = difference_map(contact, contact.patch->pressure, heavier, heavier.patch->pressure);
  double most = 0;
  for (const double v : more.values)
    if (!std::isnan(v)) most = std::max(most, v);
  EXPECT_NEAR(most / contact.patch->peak_pressure_MPa, 1.0, 0.01);
}

TEST(Palette, FindsAndRunsAnActionByName) {
  Driver user;
  user.open("curve12.toml");
  user.key(Key::k, kCtrl);
  ASSERT_EQ(user.desk.prompt.kind, Prompt::Kind::palette);
  user.type("light or dark");
  user.key(Key::enter);
  EXPECT_EQ(user.desk.prompt.kind, Prompt::Kind::none);
  EXPECT_EQ(user.desk.layout().theme, plot::ThemeName::dark);
}

TEST(Files, DroppedProfileAndCaseAndSaveAndOpenAgain) {
  const auto folder = fresh_folder("files");
  Driver user;
  user.open("curve12.toml");
  user.host.drop({(std::filesystem::path(RUNBAND_DATA) / "demo" / "wheel_new.csv").string()});
  user.settle();
  ASSERT_EQ(user.desk.prompt.kind, Prompt::Kind::profile);
  user.click("profile/go");
  EXPECT_NE(user.current().wheels[0].profile.find("wheel_new.csv"), std::string::npos);
  user.key(Key::s, kCtrlShift);
  user.key(Key::a, kCtrl);
  user.type((folder / "mine.toml").string());
  user.key(Key::enter);
  ASSERT_TRUE(std::filesystem::exists(folder / "mine.toml"));
  EXPECT_FALSE(user.desk.unsaved());
  EXPECT_NE(user.host.title().find("Runband"), std::string::npos);
  user.host.drop({(folder / "mine.toml").string()});
  user.settle();
  EXPECT_EQ(user.desk.now().document.file(), folder / "mine.toml");
  std::filesystem::remove_all(folder);
}

TEST(Files, FromLaunchToAKeptPictureInThreeActionsAndThePictureOpensAgain) {
  const auto folder = fresh_folder("picture");
  const auto before = std::filesystem::current_path();
  std::filesystem::current_path(folder);
  Driver user;
  user.open("curve12.toml");  // 1: start
  user.key(Key::e, kCtrl);    // 2: keep this picture
  user.key(Key::enter);       // 3: under the name that is offered
  std::filesystem::current_path(before);
  std::vector<std::filesystem::path> made;
  for (const auto& entry : std::filesystem::directory_iterator(folder)) made.push_back(entry.path());
  ASSERT_EQ(made.size(), 1U) << user.desk.prompt.problem;
  EXPECT_EQ(made[0].extension(), ".png");
  EXPECT_GT(std::filesystem::file_size(made[0]), 50000U);
  const auto words = plot::png_words(read_file(made[0]));
  bool carries = false;
  for (const auto& [key, text] : words) carries = carries || text.find("lateral_mm") != std::string::npos;
  EXPECT_TRUE(carries) << "the picture carries its case";
  std::filesystem::remove_all(folder);
}

TEST(Files, ClosingWithUnsavedWorkAsksAndEscapeStays) {
  Driver user;
  user.open("curve12.toml");
  user.key(Key::left);
  Event close;
  close.kind = Event::Kind::close;
  user.host.post(close);
  user.settle();
  EXPECT_EQ(user.desk.prompt.kind, Prompt::Kind::unsaved);
  EXPECT_FALSE(user.desk.quit_asked());
  user.key(Key::escape);
  EXPECT_EQ(user.desk.prompt.kind, Prompt::Kind::none);
  user.host.post(close);
  user.settle();
  user.click("unsaved/discard");
  EXPECT_TRUE(user.desk.quit_asked());
}

TEST(Files, AFileThatVanishesWhileItIsOpenIsAMessageNotALoss) {
  const auto folder = fresh_folder("vanish");
  for (const auto& entry : std::filesystem::directory_iterator(std::filesystem::path(RUNBAND_DATA) / "demo"))
    if (entry.is_regular_file()) std::filesystem::copy_file(entry.path(), folder / entry.path().filename());
  Driver user;
  user.desk.open(folder / "curve12.toml");
  user.settle();
  ASSERT_TRUE(user.desk.now().solution);
  std::filesystem::remove_all(folder);
  user.key(Key::left);
  EXPECT_TRUE(user.desk.now().failure);
  EXPECT_TRUE(user.desk.now().solution) << "what was shown stays";
  EXPECT_NE(user.desk.now().failure->message.find("csv"), std::string::npos) << user.desk.now().failure->message;
}

TEST(Window, ResizedToNothingAndBackGoesOn) {
  Driver user;
  user.open("curve12.toml");
  const std::pair<int, int> sizes[] = {{0, 0}, {1, 1}, {40, 30}, {320, 240}, {3000, 200}, {200, 1500}, {1440, 900}};
  for (const auto& [width, height] : sizes) {
    user.host.resize(width, height, 1);
    for (const Key key : {Key::n1, Key::n2, Key::n3, Key::n4, Key::n5}) {
      user.host.key(key);
      user.take_events();
    }
  }
  user.key(Key::n1);
  EXPECT_EQ(user.picture().width, 1440);
  user.host.resize(2880, 1800, 2);
  user.settle();
  EXPECT_NEAR(user.where("state.lateral").width, 2 * 252, 8) << "a fine screen shows the same layout";
}

TEST(Window, ABenchCaseHasNoWheelsetAndStillShowsItsPatch) {
  Driver user;
  user.open("bench.toml");
  ASSERT_TRUE(user.desk.now().solution);
  for (const Key key : {Key::n2, Key::n3, Key::n4, Key::n1}) user.key(key);
  EXPECT_TRUE(user.shown("bench.load"));
  EXPECT_FALSE(user.shown("state.lateral"));
}

TEST(Window, AnIdleWindowDrawsNoFrames) {
  Driver user;
  user.open("curve12.toml");
  user.settle();
  const long before = user.frame.frames();
  for (int k = 0; k < 200; ++k) user.frame.step();  // 200 turns of 1/60 s: 3.3 s
  EXPECT_LE(user.frame.frames() - before, 5) << "only the clock in the status line";
}

}  // namespace
}  // namespace runband

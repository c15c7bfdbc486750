using Pipeline.Apparatus;
using Pipeline.Quantities;

namespace Pipeline.Tests.Quantities;

public class CodataTests
{
    /// <remarks>CODATA 2022 (NIST). The first four are exact by the definition of the SI; for the others the 2018 values differ in the ninth
    /// or tenth digit, so equality is asked for.</remarks>
    [Fact]
    public void Constants_Codata2022_AreEqual()
    {
        Assert.Equal(6.62607015e-34, Codata.PlanckConstant);
        Assert.Equal(1.380649e-23, Codata.BoltzmannConstant);
        Assert.Equal(299_792_458.0, Codata.SpeedOfLight);
        Assert.Equal(1.602176634e-19, Codata.ElementaryCharge);
        Assert.Equal(9.2740100657e-24, Codata.BohrMagneton);
        Assert.Equal(1.66053906892e-27, Codata.AtomicMassConstant);
    }

    /// <remarks>CODATA 2022 (NIST): mu_B/h = 1.39962449171e10 Hz/T; mu_B/k = 0.671714 K/T.</remarks>
    [Fact]
    public void BohrMagneton_InOtherUnits_MatchesCodata()
    {
        // both are rounded to 12 digits or fewer: half a unit of the eleventh digit of mu_B is 0.75 Hz; the 2018 value is 20 Hz off
        Assert.Equal(1.39962449171e10, Codata.BohrMagneton / Codata.PlanckConstant, 1.0);
        Assert.Equal(0.671714, Codata.BohrMagneton / Codata.BoltzmannConstant, 6);
        // common practice, no source: the most that one stage of 1 T can take away
        Assert.Equal(27.9925, 2 * Codata.BohrMagneton / Codata.PlanckConstant / 1e9, 4);
    }

    /// <remarks>Common practice, no source; recomputed by this team for 59 u.</remarks>
    [Fact]
    public void EnergyAndRecoil_OfSlowMolecules_AreAsUsual()
    {
        double mass = 59 * Codata.AtomicMassConstant, energy = 0.5 * mass * 140 * 140;
        Assert.Equal(9.601237e-22, energy, 1e-27);
        Assert.Equal(1449.009, energy / Codata.PlanckConstant / 1e9, 3);
        Assert.Equal(0.0111605, Codata.PlanckConstant / (mass * 606e-9), 7);
    }

    /// <remarks>Speeds after n stages that remove 2 mu_B times 1 T each, 59 u, from 140 m/s; recomputed by this team.</remarks>
    [Theory]
    [InlineData(1, 138.641)]
    [InlineData(10, 125.752)]
    [InlineData(25, 100.668)]
    [InlineData(40, 66.741)]
    [InlineData(50, 25.846)]
    [InlineData(51, 17.011)]
    public void DeceleratedFlight_KnownStages_StartsAtTheKnownSpeed(int stages, double speed)
    {
        var flight = new DeceleratedFlight(0.1, 0.5, 0.2, stages, 2 * Codata.BohrMagneton, 59 * Codata.AtomicMassConstant);
        // the last stages multiply a rounding of 0.5 mm/s in the final speed by v_final/v_initial, which is less than 1
        Assert.Equal(140, flight.InitialSpeed(speed), 3);
    }

    [Fact]
    public void DeceleratedFlight_NoEnergyRemoved_IsFreeFlight()
    {
        var flight = new DeceleratedFlight(0.1, 0.5, 0.2, 25, 0, 59 * Codata.AtomicMassConstant);
        Assert.Equal(new FreeFlight(0.8).TimeFor(120), flight.TimeFor(120), 12);
    }
}

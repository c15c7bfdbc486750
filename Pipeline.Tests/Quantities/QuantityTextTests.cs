using Pipeline.Quantities;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Quantities;

public class QuantityTextTests
{
    [Theory]
    [InlineData("0.4500(9) m", Dimension.Length, 0.45, 0.0009)]
    [InlineData("45.0 ± 0.2 deg", Dimension.Angle, 0.7853981633974483, 0.003490658503988659)]
    [InlineData("45.0 +- 0.2 deg", Dimension.Angle, 0.7853981633974483, 0.003490658503988659)]
    [InlineData("573.2 nm", Dimension.Length, 573.2e-9, 0)]
    [InlineData("60 ns", Dimension.Time, 60e-9, 0)]
    [InlineData("0 ± 2 us", Dimension.Time, 0, 2e-6)]
    [InlineData("3 µs", Dimension.Time, 3e-6, 0)]
    [InlineData("-2 ms", Dimension.Time, -2e-3, 0)]
    [InlineData("1.60e-3 ± 5e-5", Dimension.Fraction, 1.6e-3, 5e-5)]
    [InlineData("1.5(2)e-6 s", Dimension.Time, 1.5e-6, 0.2e-6)]
    [InlineData("600 ± 60", Dimension.Fraction, 600, 60)]
    [InlineData("20 %", Dimension.Fraction, 0.2, 0)]
    [InlineData("5e6 ± 3e5 1/s", Dimension.Rate, 5e6, 3e5)]
    [InlineData("1.6e-7 V s", Dimension.VoltSecond, 1.6e-7, 0)]
    [InlineData("12(3) m/s", Dimension.Speed, 12, 3)]
    public void Parse_AsPhysicistsWrite_GivesSiValueAndUncertainty(string text, Dimension dimension, double value, double sigma)
    {
        foreach (string culture in (string[])["", "de-DE"])
            Culture.Run(culture, () =>
            {
                Measured m = QuantityText.Parse(text, dimension);
                Assert.Equal(value, m.Value, Math.Abs(value) * 1e-14);
                Assert.Equal(sigma, m.Sigma, sigma * 1e-14);
            });
    }

    /// <remarks>1 GHz times h: exact by definition of the SI (2019). 1 cm^-1: 1.986445857e-23 J, 1 u: 1.66053906892e-27 kg, mu_B:
    /// 9.2740100657e-24 J/T: CODATA 2022. 1 K times k: exact by definition of the SI.</remarks>
    [Theory]
    [InlineData("1 GHz", Dimension.Energy, 6.62607015e-25, 1e-14)]
    [InlineData("1 cm^-1", Dimension.Energy, 1.986445857e-23, 5e-10)]
    [InlineData("1 K", Dimension.Energy, 1.380649e-23, 1e-14)]
    [InlineData("1 eV", Dimension.Energy, 1.602176634e-19, 1e-14)]
    [InlineData("1 u", Dimension.Mass, 1.66053906892e-27, 1e-12)]
    [InlineData("1 mu_B", Dimension.MagneticMoment, 9.2740100657e-24, 1e-12)]
    public void Parse_NaturalUnits_MatchesCodata(string text, Dimension dimension, double expected, double relative) =>
        Assert.Equal(expected, QuantityText.Parse(text, dimension).Value, expected * relative);

    [Theory]
    [InlineData("1,5 m", Dimension.Length)]
    [InlineData("1.5", Dimension.Length)]
    [InlineData("1.5 s", Dimension.Length)]
    [InlineData("1.5 parsec", Dimension.Length)]
    [InlineData("1.5 ± m", Dimension.Length)]
    [InlineData("1.5 ± -0.1 m", Dimension.Length)]
    [InlineData("1 500 m", Dimension.Length)]
    [InlineData("NaN m", Dimension.Length)]
    [InlineData("1e400 m", Dimension.Length)]
    [InlineData("m", Dimension.Length)]
    [InlineData("", Dimension.Length)]
    [InlineData("3 m", Dimension.Fraction)]
    [InlineData("1.5 m extra", Dimension.Length)]
    public void Parse_Unclear_IsRefused(string text, Dimension dimension) =>
        Assert.Throws<FormatException>(() => QuantityText.Parse(text, dimension));
}

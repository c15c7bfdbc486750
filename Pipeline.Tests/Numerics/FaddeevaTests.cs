using System.Numerics;
using Pipeline.Numerics;

namespace Pipeline.Tests.Numerics;

public class FaddeevaTests
{
    /// <remarks>First eight: recomputed by this team, 30 digits, printed with 15. Tolerance: the accuracy asked for, 1e-13 of |w|.</remarks>
    [Theory]
    [InlineData(0, 0.1, 0.896456979969127, 0)]
    [InlineData(0, 1, 0.427583576155807, 0)]
    [InlineData(1, 1, 0.304744205256913, 0.208218938202832)]
    [InlineData(2, 0.5, 0.103358823741367, 0.284785884750094)]
    [InlineData(0.5, 0.1, 0.717587742157594, 0.408474401603016)]
    [InlineData(5, 0.001, 2.40804639671034e-5, 0.115245956674504)]
    [InlineData(0, 10, 0.0561409927438226, 0)]
    [InlineData(6.3, 1e-8, 1.47893455037235e-10, 0.0907276596841274)]
    public void W_PublishedArguments_MatchesToThirteenDigits(double x, double y, double real, double imaginary) =>
        AssertNear(new Complex(real, imaginary), Faddeeva.W(new Complex(x, y)), 1e-13);

    /// <remarks>exp(-z^2) erfc(-iz) with 60 digits by an arbitrary-precision library, computed for this test: the real axis, both sides of the
    /// change of method at |z| = 12, all directions. Tolerance: the 2e-15 that is documented, and 1e-16 for the printed digits.</remarks>
    [Theory]
    [InlineData(0, 0, 1.0, 0.0)]
    [InlineData(1e-06, 1e-06, 0.99999887162083291, 1.128377167097017e-6)]
    [InlineData(0.3, 0, 0.91393118527122819, 0.31891568277156586)]
    [InlineData(3, 0, 0.00012340980408667955, 0.20115731703760039)]
    [InlineData(6.5, 0, 4.4777324417183012e-19, 0.087864424731045662)]
    [InlineData(-2.5, 0.25, 0.032634264790801827, -0.24519105306169791)]
    [InlineData(3.9, 3.9, 0.073458064422949346, 0.071089764372329395)]
    [InlineData(8, 8, 0.035397945774381065, 0.035122525571907418)]
    [InlineData(11.9, 0.001, 4.0270739332259357e-6, 0.047580093820010848)]
    [InlineData(11.99, 0, 3.679441074163734e-63, 0.047220407302337897)]
    [InlineData(12.01, 0, 2.2767770278218889e-63, 0.04714121680850127)]
    [InlineData(0.5, 11.99, 0.046813002064419083, 0.0019388416508981507)]
    [InlineData(0.5, 12.01, 0.046735838109015337, 0.0019324657727617237)]
    [InlineData(-9, 8.5, 0.031405597884343559, -0.033036573134156121)]
    [InlineData(30, 0.001, 6.2792502343067086e-7, 0.018816784847694873)]
    [InlineData(150, 40, 0.00093646737490450908, 0.0035116069325495133)]
    public void W_HighPrecisionValues_MatchesAsDocumented(double x, double y, double real, double imaginary) =>
        AssertNear(new Complex(real, imaginary), Faddeeva.W(new Complex(x, y)), 2.1e-15);

    [Theory]
    [InlineData(1, -1e-300)]
    [InlineData(1, double.NaN)]
    [InlineData(double.NaN, 1)]
    [InlineData(double.PositiveInfinity, 1)]
    [InlineData(1, double.PositiveInfinity)]
    public void W_OutsideTheUpperHalfPlane_IsRefused(double x, double y) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => Faddeeva.W(new Complex(x, y)));

    static void AssertNear(Complex expected, Complex w, double relative) => Assert.InRange((w - expected).Magnitude, 0, relative * expected.Magnitude);
}

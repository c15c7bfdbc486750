using Pipeline.Apparatus;
using Pipeline.Configuration;
using Pipeline.Tests.Support;

namespace Pipeline.Tests.Configuration;

public sealed class HyperfineReaderTests : IDisposable
{
    const string Head = "name = \"40Ca19F\"\nmass = { value = \"58.96099 u\", source = \"s\" }\nwavelength = { value = \"606.3 nm\", source = \"s\" }\nnatural_linewidth = { value = \"8.29 MHz\", source = \"s\" }\n";

    const string Levels = "[hyperfine]\nlevel = 1\nrotational_constant = { value = \"10.26754 GHz\", source = \"s\" }\nspin_rotation = { value = \"39.65891 MHz\", source = \"s\" }\nfermi_b = { value = \"109.1839 MHz\", source = \"paper\" }\ndipolar_c = { value = \"40.1190 MHz\", source = \"s\" }\nnuclear_spin_rotation = { value = \"28.8 kHz\", source = \"s\" }\n";

    readonly string _folder = Directory.CreateTempSubdirectory("arrivals-species").FullName;

    public void Dispose() => Directory.Delete(_folder, recursive: true);

    /// <remarks>Levels of N = 1: recomputed by this team, 1 kHz; lines have the opposite sign.</remarks>
    [Fact]
    public void Read_Constants_GiveTheLines()
    {
        Species species = Read(Head + Levels);
        Assert.Equal([98.678, 22.421, -24.243, -49.145], species.Lines.Select(l => Math.Round(l.OffsetHz / 1e6, 3)));
        Assert.Equal([3, 1, 3, 5], species.Lines.Select(l => l.Weight));
        Assert.Equal("paper", species.Sources["hyperfine.fermi_b"]);
        string contact = Levels.Replace("fermi_b = { value = \"109.1839 MHz\"", "fermi_contact = { value = \"122.5569 MHz\"", StringComparison.Ordinal);
        Assert.All(Read(Head + contact).Lines.Zip(species.Lines), p => Assert.Equal(p.Second.OffsetHz, p.First.OffsetHz, 1.0));
    }

    [Theory]
    [InlineData("fermi_b = {", "fermi_contact = { value = \"122 MHz\", source = \"s\" }\nfermi_b = {", "[hyperfine] fermi_contact", "both fermi_b and fermi_contact")]
    [InlineData("fermi_b = {", "fermi_bf = {", "[hyperfine] fermi_b", "b_F = b + c/3")]
    [InlineData("level = 1", "level = -1", "[hyperfine] level", "0 to 1000")]
    [InlineData("level = 1", "", "[hyperfine] level", "no such key")]
    [InlineData(", source = \"paper\"", "", "[hyperfine.fermi_b] source", "no such key")]
    [InlineData("\"10.26754 GHz\"", "\"-10.26754 GHz\"", "[hyperfine] rotational_constant", "must be positive")]
    [InlineData("dipolar_c =", "dipolar =", "[hyperfine] dipolar", "dipolar_c")]
    [InlineData("[hyperfine]", "[[lines]]\noffset = \"0 MHz\"\nweight = 1\n[hyperfine]", "lines", "both [[lines]] and [hyperfine]")]
    public void Read_Wrong_SaysWhereAndWhat(string text, string replacement, string where, string says)
    {
        Assert.Contains(text, Levels, StringComparison.Ordinal);
        Fault fault = Assert.Throws<DataFaultException>(() => Read(Head + Levels.Replace(text, replacement, StringComparison.Ordinal))).Fault;
        Assert.Contains(where, fault.Where, StringComparison.Ordinal);
        Assert.Contains(says, fault.ToString(), StringComparison.Ordinal);
    }

    /// <summary>An offset is from the weighted mean of the lines: shipped lists keep to it.</summary>
    [Fact]
    public void Read_ShippedSpecies_HaveTheirLinesAboutTheMean()
    {
        string folder = Path.Combine(Repository.Root, "config", "species");
        string[] files = Directory.GetFiles(folder, "*.toml");
        Assert.NotEmpty(files);
        foreach (string file in files)
            // lists are typed to 10 kHz or better
            Assert.Equal(0, SpeciesReader.Read(TomlFile.Read(folder, Path.GetFileName(file))).Lines.Sum(l => l.Weight * l.OffsetHz), 1e5);
    }

    Species Read(string text)
    {
        File.WriteAllText(Path.Combine(_folder, "X.toml"), text);
        return SpeciesReader.Read(TomlFile.Read(_folder, "X.toml"));
    }
}

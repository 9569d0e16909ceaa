using System.Text;
using System.Text.Json.Nodes;
using GainMargin.Tests.Support;

namespace GainMargin.Tests.Stability;

public sealed class ResultJsonTests
{
    public static TheoryData<string> Paths() => ["flutter", "divergence", "infinity", "touch", "lossless", "units"];

    [Theory]
    [MemberData(nameof(Paths))]
    public void Write_ThenRead_ThenWrite_GivesTheSameBytes(string name)
    {
        var boundary = Run(name);

        byte[] first = Bytes(boundary);
        var read = ResultJson.ReadBoundary(new MemoryStream(first));

        Assert.Equal(first, Bytes(read));
        Assert.Equal(boundary.ToString(), read.ToString());
        Assert.Equal(boundary.Onsets.Select(o => o.Gain), read.Onsets.Select(o => o.Gain));
        Assert.Equal(boundary.Onsets.SelectMany(o => o.RightMode.Values), read.Onsets.SelectMany(o => o.RightMode.Values));
        Assert.Equal(boundary.Loci.SelectMany(l => l.Points), read.Loci.SelectMany(l => l.Points));
        Assert.Equal(boundary.Provenance, read.Provenance);
        Assert.Equal(boundary.VerdictAt(boundary.ReleaseGain), read.VerdictAt(boundary.ReleaseGain));
    }

    [Fact]
    public void Write_Boundary_CarriesWhatAComparisonNeeds()
    {
        var root = JsonNode.Parse(Bytes(Run("flutter")))!;

        Assert.Equal(1, (int)root["schemaVersion"]!);
        var boundary = root["boundary"]!;
        var onset = boundary["onsets"]![0]!;
        Assert.Equal("flutter", (string)onset["kind"]!);
        Assert.Equal(-0.1, (double)onset["gain"]!, 1e-14);
        foreach (string key in new[] { "gainUncertainty", "frequency", "rightMode", "leftMode", "below", "above", "energy", "growthRateSlope", "backwardError" })
        {
            Assert.NotNull(onset[key]);
        }

        foreach (string key in new[] { "libraryVersion", "inputHash", "optionsHash", "backend", "runtime", "method" })
        {
            Assert.False(string.IsNullOrEmpty((string)boundary["provenance"]![key]!), key);
        }

        Assert.Equal(0.5, (double)boundary["releaseGain"]!);
    }

    [Fact]
    public void Write_UnlimitedFrequency_IsNullWithAFlag()
    {
        var frequency = JsonNode.Parse(Bytes(Run("infinity")))!["boundary"]!["onsets"]![0]!["frequency"]!.AsObject();

        Assert.Null(frequency["radians"]);
        Assert.True((bool)frequency["isUnlimited"]!);
    }

    [Fact]
    public void ReadBoundary_Truncated_SaysItIsNotComplete()
    {
        byte[] bytes = Bytes(Run("flutter"));
        foreach (int length in new[] { 0, 1, bytes.Length / 3, bytes.Length - 2 })
        {
            var failure = Assert.Throws<InvalidDataException>(() => ResultJson.ReadBoundary(new MemoryStream(bytes[..length])));
            Assert.Contains("not a complete stability boundary", failure.Message, StringComparison.Ordinal);
        }
    }

    [Fact]
    public void ReadBoundary_NewerSchema_SaysWhichVersion()
    {
        string newer = Encoding.UTF8.GetString(Bytes(Run("flutter"))).Replace("\"schemaVersion\": 1", "\"schemaVersion\": 2", StringComparison.Ordinal);

        var failure = Assert.Throws<InvalidDataException>(() => Read(newer));

        Assert.Contains("schema version 2", failure.Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("{}")]
    [InlineData("[]")]
    [InlineData("null")]
    [InlineData("""{ "schema": "something-else", "schemaVersion": 1 }""")]
    [InlineData("""{ "schema": 3, "schemaVersion": 1 }""")]
    public void ReadBoundary_AnotherFile_SaysItIsNone(string json)
        => Assert.Contains("not a stability boundary", Assert.Throws<InvalidDataException>(() => Read(json)).Message, StringComparison.Ordinal);

    [Theory]
    [InlineData("onsets")]
    [InlineData("intervals")]
    [InlineData("provenance")]
    [InlineData("completeness")]
    public void ReadBoundary_EntryMissing_NamesIt(string entry)
    {
        var root = JsonNode.Parse(Bytes(Run("flutter")))!;
        root["boundary"]!.AsObject().Remove(entry);

        Assert.Contains(entry, Assert.Throws<InvalidDataException>(() => Read(root.ToJsonString())).Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("\"isUnlimited\": false", "\"isUnlimited\": true")]
    [InlineData("\"dofs\": [\n", "\"dofs\": [ \"extra\",\n")]
    [InlineData("\"kind\": \"flutter\"", "\"kind\": \"wobble\"")]
    public void ReadBoundary_EntryThatMakesNoSense_IsRefused(string what, string with)
    {
        string json = Encoding.UTF8.GetString(Bytes(Run("flutter"))).ReplaceLineEndings("\n");
        Assert.Contains(what, json, StringComparison.Ordinal);

        Assert.Throws<InvalidDataException>(() => Read(json.Replace(what, with, StringComparison.Ordinal)));
    }

    private static StabilityBoundary Run(string name) => GainSweep.Run(name switch
    {
        "divergence" => Boundaries.Divergence(),
        "infinity" => Boundaries.ThroughInfinity(),
        "touch" => Boundaries.Touch(),
        "lossless" => Boundaries.Lossless(),
        "units" => GainPath.OneLoop(
            ClosedLoop.Create(
                ElasticStructure.FromRowMajor(["x"], [1], [-0.1], [1], new UnitLabels { Time = "s" }),
                ControlLaw.Of(Boundaries.Loop("g", "x", "x", new() { Rate = 1 }, 0.5) with { GainUnit = "N s/m", DisplayScale = 0.5 })),
            "g", GainRange.Between(0, 1)),
        _ => Boundaries.Flutter(),
    });

    private static byte[] Bytes(StabilityBoundary boundary)
    {
        using var stream = new MemoryStream();
        ResultJson.Write(stream, boundary);
        return stream.ToArray();
    }

    private static StabilityBoundary Read(string json) => ResultJson.ReadBoundary(new MemoryStream(Encoding.UTF8.GetBytes(json)));
}
